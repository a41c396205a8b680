package picks

import (
	"path/filepath"
	"strings"
	"time"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// Format is a kind of file that a plan is written as.
type Format int

// The formats, by the ending of the file's name.
const (
	XLSX Format = iota + 1 // .xlsx: the workbook
	CSV                    // .csv: the picks alone
)

// ForFile returns the format that the ending of the file's name asks for, in
// any case. The error (inventory.Invalid) names the endings that exist.
func ForFile(name string) (Format, error) {
	ending := filepath.Ext(name)
	switch strings.ToLower(ending) {
	case ".xlsx":
		return XLSX, nil
	case ".csv":
		return CSV, nil
	}
	const endings = "use .xlsx for the workbook or .csv for the picks alone"
	if ending == "" || ending == "." {
		return 0, inventory.Errorf(inventory.Invalid, "the file name %q has no ending: %s", name, endings)
	}
	return 0, inventory.Errorf(inventory.Invalid, "picks are not written as %s files (%q): %s", ending, name, endings)
}

// Paper is what the workbook is laid out for.
type Paper int

// The papers, landscape.
const (
	A4 Paper = iota
	Letter
)

// Options says what the documents hold besides the plan.
type Options struct {
	Now   time.Time       // the day of planning, printed and stored as created; the zero time leaves it out
	Kit   inventory.KitID // printed; 0 leaves it out
	Paper Paper
}

// Document returns the plan in the format. The error is Workbook's.
func (f Format) Document(plan optimize.Plan, opts Options) ([]byte, error) {
	switch f {
	case XLSX:
		return Workbook(plan, opts)
	case CSV:
		return PicksCSV(plan), nil
	}
	return nil, inventory.Errorf(inventory.Invalid, "no format was chosen: use .xlsx or .csv")
}
