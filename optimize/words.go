package optimize

import (
	"strings"

	"tickdrawer/inventory"
)

var basisWords = []string{Nominal: "nominal", WorstCase: "worst-case"}

// String returns the basis as it is written on the command line.
func (b Basis) String() string { return basisWords[b] }

// ParseBasis returns the basis with the word. The error (inventory.Invalid)
// lists the words.
func ParseBasis(s string) (Basis, error) {
	for i, word := range basisWords {
		if s == word {
			return Basis(i), nil
		}
	}
	return 0, inventory.Errorf(inventory.Invalid, "no basis is called %q: use %s", s, strings.Join(basisWords, " or "))
}

var preferenceWords = []string{PreferParts: "parts", PreferCloseness: "closeness", PreferCost: "cost", PreferSpare: "spare"}

// String returns the preference as it is written on the command line.
func (p Preference) String() string { return preferenceWords[p] }

// ParsePreference returns the preference with the word. The error
// (inventory.Invalid) lists the words.
func ParsePreference(s string) (Preference, error) {
	for i, word := range preferenceWords {
		if s == word {
			return Preference(i), nil
		}
	}
	return 0, inventory.Errorf(inventory.Invalid, "no preference is called %q: use %s", s, strings.Join(preferenceWords, ", "))
}
