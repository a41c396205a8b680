package sqlite

import (
	"context"
	"fmt"
	"slices"
	"strings"

	"tickdrawer/inventory"
)

// count is what a stocktake found in a lot.
type count struct {
	lot    stored
	name   string // of the part
	pieces int64
	source source
}

// counts books what a stocktake found beside what the drawer says.
func (w *intakeWriter) counts() error {
	var held []string
	for _, c := range w.order {
		if c.pieces < c.lot.reserved {
			kits, err := holders(w.ctx, w.tx, c.lot.id)
			if err != nil {
				return err
			}
			held = append(held, fmt.Sprintf("lot %d (%s): %d counted, %d reserved by %s", c.lot.id, c.name, c.pieces, c.lot.reserved, kits))
			continue
		}
		if c.pieces != c.lot.onHand {
			if err := w.move(inventory.MoveCount, c.lot, c.pieces-c.lot.onHand, c.source); err != nil {
				return err
			}
		}
	}
	if held != nil {
		slices.SortFunc(held, inventory.NaturalCompare)
		return inventory.Errorf(inventory.Shortage, "fewer pieces were counted than are promised; nothing was booked; release the kit first (\"tickdrawer release KIT\"):\n  %s", strings.Join(held, "\n  "))
	}
	return nil
}

// holders returns the kits that hold pieces of the lot, for a sentence.
func holders(ctx context.Context, q querier, lot inventory.LotID) (string, error) {
	rows, err := q.QueryContext(ctx, "SELECT kit_id FROM reservation WHERE lot_id = ? ORDER BY kit_id", lot)
	if err != nil {
		return "", err
	}
	defer rows.Close()
	var kits []string
	for rows.Next() {
		var kit inventory.KitID
		if err := rows.Scan(&kit); err != nil {
			return "", err
		}
		kits = append(kits, fmt.Sprintf("kit %d", kit))
	}
	return strings.Join(kits, " and "), rows.Err()
}
