package inventory

import "time"

// Micros is an amount of money in millionths of the drawer's currency, so that
// sums and ties of costs are exact.
type Micros int64

// Float returns the amount in whole units of the currency.
func (m Micros) Float() float64 { return float64(m) / 1e6 }

// LotID is the number of a lot; the drawer gives them out from 1.
type LotID int64

// Lot is a quantity of one part in one bin. 0 ≤ Reserved ≤ OnHand always.
type Lot struct {
	ID       LotID
	Part     Part
	Bin      string  // "" where the import did not say
	Measured float64 // measured value in the part's unit; 0 where not measured
	UnitCost *Micros // cost of one piece; nil where unstated
	Note     string
	OnHand   int64 // pieces in the bin
	Reserved int64 // of these, promised to kits
}

// Available returns the pieces that a new plan may use: OnHand - Reserved.
func (l Lot) Available() int64 { return l.OnHand - l.Reserved }

// Value returns the value to compute with: the measured one where there is one,
// else the part's nominal value.
func (l Lot) Value() float64 {
	if l.Measured != 0 {
		return l.Measured
	}
	return l.Part.Value
}

// Receipt is one row to be booked in: a quantity of a part into a bin. The same
// part with the same measured value in the same bin tops up the lot that lies
// there already.
type Receipt struct {
	Part     Part
	Bin      string  // "" where it is not stated
	Measured float64 // in the part's unit; 0 where not measured
	UnitCost *Micros // of one piece; nil where unstated
	Note     string
	Quantity int64 // ≥ 1 for a receipt; ≥ 0 as a stocktake's count
}

// MovementKind says why pieces moved.
type MovementKind string

// The kinds of movement.
const (
	MoveReceipt MovementKind = "receipt" // pieces came in from a file
	MoveCount   MovementKind = "count"   // a stocktake found more or fewer
	MovePull    MovementKind = "pull"    // taken out for a kit
	MovePutback MovementKind = "putback" // brought back from a kit
)

// MovementID is the number of a movement, in the order of booking.
type MovementID int64

// Movement is one line of the ledger: it is never changed or deleted.
type Movement struct {
	ID      MovementID
	At      time.Time // UTC
	Who     string    // who booked it
	Kind    MovementKind
	Lot     LotID
	Part    Part   // the lot's part, for reading the line
	Bin     string // the lot's bin
	Delta   int64  // pieces, positive in, negative out, never 0
	Balance int64  // pieces on hand in the lot afterwards
	Kit     KitID  // 0 where no kit is concerned
	Source  string // the name of the file that was booked; "" where none
}
