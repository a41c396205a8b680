package optimize

import "tickdrawer/inventory"

// Stage is one timer of a board. References names the place of each position
// on the board ("ra": "R1"); "timer" and "inverter" name the packages. What is
// not named is called after the stage ("isophase.ra").
type Stage struct {
	Name       string
	Spec       Spec
	References map[string]string
}

// FixedLine is a line of the board's bill of materials that no search decides:
// one piece at each reference of a part at least as good as Part (same kind and
// value or part number; tolerance and ratings at least as good where stated).
type FixedLine struct {
	References []string
	Part       inventory.Part
}

// Job is a board to be built: its stages, its fixed lines, and how many.
type Job struct {
	Name   string
	Boards int64
	Stages []Stage
	Fixed  []FixedLine
}

// StageFit is the fit chosen for a stage.
type StageFit struct {
	Stage string
	Fit   Fit
	// Places tells for every piece of the fit where it goes, in the order of
	// Fit.Networks and their leaves, then the inverter, then the timer.
	Places []Place
}

// Place is one piece at one reference of the board.
type Place struct {
	Reference string // "R1", or "R1a" and "R1b" where a network fills the place
	Position  string // "ra", "timer", "inverter"; "" for a fixed line
	Lot       inventory.Lot
}

// Variant is a set of fits with which some number of boards is built.
type Variant struct {
	Boards int64
	Stages []StageFit
	Fixed  []Place // one lot a reference: the one most of its boards take
}

// PlannedPick is what the whole job takes from one lot.
type PlannedPick struct {
	Lot        inventory.Lot
	Quantity   int64
	PerBoard   int64    // pieces on one board that come from this lot (the largest over the variants)
	References []string // of one board, R2 before R10
}

// Left returns the pieces that stay available in the lot once the pick is out.
func (p PlannedPick) Left() int64 { return p.Lot.Available() - p.Quantity }

// Shortage is what is missing for the boards wanted.
type Shortage struct {
	References []string
	Kind       inventory.Kind
	Value      float64 // ohm or farad; 0 where the part number says it
	PartNumber string
	Short      int64  // pieces
	Why        string // for people: what was looked for
}

// Plan is a job's result: what is built with what.
type Plan struct {
	Job       Job
	Built     int64
	Variants  []Variant
	Picks     []PlannedPick // sorted by bin, then lot
	Shortages []Shortage
	Warnings  []string // on the fixed lines; each fit carries its own
	Search    Search
}
