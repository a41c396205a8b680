package main

import (
	"fmt"
	"slices"
	"strings"
	"unicode"

	"tickdrawer/importers"
	"tickdrawer/inventory"
)

// options returns how the flags say that files are to be read; given says
// whether a flag was written.
func (f importFlags) options(given func(flag string) bool) (importers.Options, error) {
	options := importers.Options{Columns: map[string]string{}, Encoding: f.encoding, Stocktake: f.stocktake}
	for _, pair := range f.columns {
		at := strings.LastIndex(pair, "=")
		if at < 1 || at == len(pair)-1 {
			return options, usagef("--column %q is not THEIRS=FIELD, such as \"Wert=value\"", pair)
		}
		heading, field := pair[:at], strings.ToLower(strings.TrimSpace(pair[at+1:]))
		if !slices.Contains(importers.Fields(), importers.Field(field)) {
			return options, usagef("--column %q: there is no field %q; the fields are %s", pair, field, fieldWords())
		}
		if other, twice := options.Columns[heading]; twice && other != field {
			return options, usagef("--column gives the heading %q two fields, %s and %s", heading, other, field)
		}
		options.Columns[heading] = field
	}
	if given("encoding") && !slices.Contains(importers.Encodings(), f.encoding) {
		return options, usagef("--encoding %q is not known; known are %s", f.encoding, strings.Join(importers.Encodings(), ", "))
	}
	var err error
	if options.Kind, err = kindFlag(given("kind"), f.kind); err != nil {
		return options, err
	}
	if given("delimiter") {
		options.Delimiter, err = delimiterFlag(f.delimiter)
	}
	return options, err
}

// delimiterFlag returns the delimiter that the flag names.
func delimiterFlag(text string) (rune, error) {
	if text == "tab" || text == `\t` {
		return '\t', nil
	}
	characters := []rune(text)
	if len(characters) != 1 || unicode.IsLetter(characters[0]) || unicode.IsDigit(characters[0]) {
		return 0, usagef("--delimiter %q is neither a sign such as ; , | nor the word tab", text)
	}
	return characters[0], nil
}

// kindFlag returns the kind that --kind names; "" where it is not given.
func kindFlag(given bool, word string) (inventory.Kind, error) {
	if !given {
		return "", nil
	}
	kind, err := inventory.ParseKind(word)
	if err != nil {
		return "", usageError{fmt.Errorf("--%w", err)} // it begins with "kind:"
	}
	return kind, nil
}

// fieldWords returns the fields as a list for messages.
func fieldWords() string {
	var words []string
	for _, field := range importers.Fields() {
		words = append(words, string(field))
	}
	return strings.Join(words, ", ")
}
