package sqlite

import (
	"math"
	"strings"
	"unicode"
	"unicode/utf8"

	"tickdrawer/inventory"
)

func checkReceipt(r inventory.Receipt, stocktake bool) error {
	name := r.Part.Name()
	switch {
	case stocktake && r.Quantity < 0:
		return inventory.Errorf(inventory.Invalid, "%s: a count is 0 or more, not %d", name, r.Quantity)
	case !stocktake && r.Quantity < 1:
		return inventory.Errorf(inventory.Invalid, "%s: a receipt is at least one piece, not %d", name, r.Quantity)
	case !(r.Measured >= 0) || math.IsInf(r.Measured, 0):
		return inventory.Errorf(inventory.Invalid, "%s: a measured value is a number above 0", name)
	case r.Measured > 0 && r.Part.Kind.Unit() == "":
		return inventory.Errorf(inventory.Invalid, "%s: a part of kind %s has no value to measure", name, r.Part.Kind)
	case r.UnitCost != nil && *r.UnitCost < 0:
		return inventory.Errorf(inventory.Invalid, "%s: a unit cost is never below 0", name)
	case unprintable(r.Bin):
		return inventory.Errorf(inventory.Invalid, "%s: bin %q holds characters that do not print: write it again", name, r.Bin)
	case unprintable(r.Note):
		return inventory.Errorf(inventory.Invalid, "%s: note %q holds characters that do not print: write it again", name, r.Note)
	}
	return nil
}

func unprintable(text string) bool {
	return !utf8.ValidString(text) || strings.ContainsFunc(text, unicode.IsControl)
}

func tooMany(part string) error {
	return inventory.Errorf(inventory.Invalid, "%s: more than %d pieces in one lot is out of reason: check the quantity", part, int64(MostPieces))
}

// mostNote is the longest note that a lot gathers, in bytes: a booking must not
// become slower with every row that it tops up.
const mostNote = 8 << 10

// withNote returns the note with what is new about the other; "; " divides. Where
// it becomes longer than mostNote the oldest gives way, and "…" says so.
func withNote(note, other string) string {
	const divider, left = "; ", "…; "
	switch {
	case note == "":
		return other
	case other == "" || strings.Contains(divider+note+divider, divider+other+divider):
		return note
	case len(note)+len(divider)+len(other) <= mostNote:
		return note + divider + other
	}
	kept := note[min(len(note), len(note)+len(divider)+len(other)+len(left)-mostNote):]
	if _, whole, found := strings.Cut(kept, divider); found {
		return left + whole + divider + other
	}
	return left + other
}
