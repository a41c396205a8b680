package inventory

import (
	"regexp"
	"strings"
	"unicode"

	"golang.org/x/text/unicode/norm"
)

// Words for a dielectric, without accents, as English, German, French and
// Spanish lists write them. A film capacitor is not polarised whatever metal its
// foils are.
var (
	unpolarisedWords = regexp.MustCompile(`bipol|non[- ]?polar|not polar|unpolar|ungepolt|no polar|apolar|sans polarite|sin polaridad|film|folie|polyester|polypropyl|polycarbon|polystyr|polyimide|\b(bp|np)\b`)
	polarisedWords   = regexp.MustCompile(`electroly?t|electroli|elektrolyt|\belkos?\b|\belcos?\b|tantal|niobium|niob\b|aluminium|aluminum|aluminio|\balu?\b|\belec\b|\bta\b|polymer|polimer|edlc|supercap|ultracap|double layer|doppelschicht`)
)

// Polarised reports whether the part is a capacitor whose dielectric is named as
// one that reverse voltage destroys: aluminium electrolytic, tantalum, niobium,
// polymer, double layer. A bipolar electrolytic is not polarised, and neither is
// a dielectric that nothing is known of.
func (p Part) Polarised() bool {
	if p.Kind != Capacitor {
		return false
	}
	words := withoutAccents(p.Dielectric)
	return polarisedWords.MatchString(words) && !unpolarisedWords.MatchString(words)
}

// withoutAccents returns the text in lower case with its accents dropped.
func withoutAccents(text string) string {
	return strings.Map(func(r rune) rune {
		if unicode.Is(unicode.Mn, r) {
			return -1
		}
		return r
	}, norm.NFD.String(strings.ToLower(text)))
}
