package inventory

import "time"

// KitID is the number of a kit; the drawer gives them out from 1.
type KitID int64

// KitState is how far a kit has come.
type KitState string

// The states of a kit: planned → reserved → pulled, where reserved may be left for
// released and come back, and a planned or released kit may be pulled at once.
// Pieces are held only while it is reserved; a pulled kit stays pulled, also when
// all of it is put back.
const (
	KitPlanned  KitState = "planned"  // computed and kept; holds nothing
	KitReserved KitState = "reserved" // its picks are promised to it
	KitPulled   KitState = "pulled"   // its picks are booked out
	KitReleased KitState = "released" // was reserved, given up
)

// Pick is what one kit takes from one lot, for all its boards.
type Pick struct {
	Lot        LotID
	Quantity   int64    // ≥ 1
	References []string // of one board, sorted the way people count: R2 before R10
	Returned   int64    // of Quantity, put back already
}

// Kit is a planned job: what it takes from which lot.
type Kit struct {
	ID        KitID
	Job       string
	Boards    int64 // that the picks build
	Wanted    int64 // boards that were asked for, ≥ Boards
	State     KitState
	CreatedAt time.Time // UTC
	Picks     []Pick    // sorted by lot
	Plan      []byte    // the whole result as printed (JSON), for later documents
}
