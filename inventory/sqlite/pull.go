package sqlite

import (
	"context"
	"database/sql"
	"fmt"
	"strings"

	"tickdrawer/inventory"
)

// Reserve promises the picks of a planned or released kit to it. Errors:
// NotFound where there is no such kit; Conflict where it is in another state or
// has no picks; Shortage, naming every lot that has too few available pieces.
func (d *Drawer) Reserve(ctx context.Context, id inventory.KitID) error {
	return d.within(ctx, "reserve in", func(tx *sql.Tx) error { return reserve(ctx, tx, id) })
}

func reserve(ctx context.Context, tx *sql.Tx, id inventory.KitID) error {
	kit, err := kitByID(ctx, tx, id)
	if err != nil {
		return err
	}
	if kit.State != inventory.KitPlanned && kit.State != inventory.KitReleased {
		return inventory.Errorf(inventory.Conflict, "kit %d is %s: only a planned or released kit can be reserved", id, kit.State)
	}
	if len(kit.Picks) == 0 {
		return inventory.Errorf(inventory.Conflict, "kit %d has no picks: there is nothing to reserve", id)
	}
	if _, err := enough(ctx, tx, kit, "reserved"); err != nil {
		return err
	}
	if err := setState(ctx, tx, id, inventory.KitReserved); err != nil {
		return err
	}
	_, err = tx.ExecContext(ctx, "INSERT INTO reservation (kit_id, lot_id, quantity) SELECT kit_id, lot_id, quantity - pulled FROM pick WHERE kit_id = ?", id)
	return err
}

// enough returns the lots of the kit's picks, or a Shortage where a pick is more
// than is available; done is what could not be done.
func enough(ctx context.Context, q querier, kit inventory.Kit, done string) (map[inventory.LotID]inventory.Lot, error) {
	lots, err := pickedLots(ctx, q, kit.ID)
	if err != nil {
		return nil, err
	}
	var missing []string
	for _, pick := range kit.Picks {
		lot := lots[pick.Lot]
		if lot.Available() >= pick.Quantity {
			continue
		}
		sentence := fmt.Sprintf("lot %d (%s, %s): %d wanted, %d available, %d missing",
			pick.Lot, lot.Part.Name(), binName(lot.Bin), pick.Quantity, lot.Available(), pick.Quantity-lot.Available())
		if lot.Reserved > 0 {
			kits, err := holders(ctx, q, lot.ID)
			if err != nil {
				return nil, err
			}
			sentence += fmt.Sprintf("; %d reserved by %s", lot.Reserved, kits)
		}
		missing = append(missing, sentence)
	}
	if missing != nil {
		name := kit.Job
		if name == "" {
			name = "the kit"
		}
		return nil, inventory.Errorf(inventory.Shortage, "%s cannot be %s: pieces that it was planned with are gone; nothing was changed; plan it again:\n  %s", name, done, strings.Join(missing, "\n  "))
	}
	return lots, nil
}

// pickedLots returns the lots that the kit picks from.
func pickedLots(ctx context.Context, q querier, kit inventory.KitID) (map[inventory.LotID]inventory.Lot, error) {
	lots, err := lotsWhere(ctx, q, "WHERE l.id IN (SELECT lot_id FROM pick WHERE kit_id = ?)", kit)
	byID := map[inventory.LotID]inventory.Lot{}
	for _, lot := range lots {
		byID[lot.ID] = lot
	}
	return byID, err
}

func binName(bin string) string {
	if bin == "" {
		return "no bin"
	}
	return "bin " + bin
}

// Release frees what a reserved kit holds. Errors: NotFound where there is no
// such kit; Conflict where it holds nothing.
func (d *Drawer) Release(ctx context.Context, id inventory.KitID) error {
	return d.within(ctx, "release in", func(tx *sql.Tx) error {
		kit, err := kitByID(ctx, tx, id)
		if err != nil {
			return err
		}
		if kit.State != inventory.KitReserved {
			return inventory.Errorf(inventory.Conflict, "kit %d is %s: it holds nothing to release", id, kit.State)
		}
		if err := free(ctx, tx, id); err != nil {
			return err
		}
		return setState(ctx, tx, id, inventory.KitReleased)
	})
}

// free ends what is reserved for the kit.
func free(ctx context.Context, tx *sql.Tx, id inventory.KitID) error {
	_, err := tx.ExecContext(ctx, "DELETE FROM reservation WHERE kit_id = ?", id)
	return err
}

func setState(ctx context.Context, tx *sql.Tx, id inventory.KitID, state inventory.KitState) error {
	_, err := tx.ExecContext(ctx, "UPDATE kit SET state = ? WHERE id = ?", string(state), id)
	return err
}

// Pull books the picks of a kit out, once, and returns the movements. A reserved
// kit takes what it holds; another takes what is available. Errors: NotFound
// where there is no such kit; Conflict where it was pulled before or has no picks;
// Shortage, naming every lot that has too few pieces, with nothing changed.
func (d *Drawer) Pull(ctx context.Context, id inventory.KitID) ([]inventory.Movement, error) {
	var movements []inventory.Movement
	err := d.within(ctx, "pull from", func(tx *sql.Tx) error {
		kit, err := kitByID(ctx, tx, id)
		if err != nil {
			return err
		}
		if kit.State == inventory.KitPulled {
			return inventory.Errorf(inventory.Conflict, "kit %d was pulled already: nothing was booked; \"tickdrawer putback %d\" brings it back", id, id)
		}
		if len(kit.Picks) == 0 {
			return inventory.Errorf(inventory.Conflict, "kit %d has no picks: there is nothing to pull", id)
		}
		if err := free(ctx, tx, id); err != nil {
			return err
		}
		lots, err := enough(ctx, tx, kit, "pulled")
		if err != nil {
			return err
		}
		var changes []change
		for _, pick := range kit.Picks {
			changes = append(changes, change{lots[pick.Lot], -pick.Quantity})
		}
		if movements, err = d.moveKit(ctx, tx, inventory.MovePull, id, changes); err != nil {
			return err
		}
		return setState(ctx, tx, id, inventory.KitPulled)
	})
	if err != nil {
		return nil, err
	}
	return movements, nil
}

// PutBack books pieces of a pulled kit back: all that is still out, or so many
// of one lot (lot not 0). It returns the movements. Errors: NotFound where there
// is no such kit; Conflict where it is not pulled or nothing of it is out; Invalid
// where more would come back than is out, or the kit took nothing from the lot.
func (d *Drawer) PutBack(ctx context.Context, id inventory.KitID, lot inventory.LotID, quantity int64) ([]inventory.Movement, error) {
	var movements []inventory.Movement
	err := d.within(ctx, "put back into", func(tx *sql.Tx) error {
		kit, err := kitByID(ctx, tx, id)
		if err != nil {
			return err
		}
		back, err := returning(kit, lot, quantity)
		if err != nil {
			return err
		}
		lots, err := pickedLots(ctx, tx, id)
		if err != nil {
			return err
		}
		var changes []change
		for _, pick := range back {
			if pick.Quantity > MostPieces-lots[pick.Lot].OnHand {
				return tooMany(lots[pick.Lot].Part.Name())
			}
			changes = append(changes, change{lots[pick.Lot], pick.Quantity})
		}
		movements, err = d.moveKit(ctx, tx, inventory.MovePutback, id, changes)
		return err
	})
	if err != nil {
		return nil, err
	}
	return movements, nil
}

// returning returns the lots and quantities that come back.
func returning(kit inventory.Kit, lot inventory.LotID, quantity int64) ([]inventory.Pick, error) {
	if kit.State != inventory.KitPulled {
		return nil, inventory.Errorf(inventory.Conflict, "kit %d is %s: only a pulled kit can be put back", kit.ID, kit.State)
	}
	if lot == 0 && quantity != 0 {
		return nil, inventory.Errorf(inventory.Invalid, "%d pieces of which lot? name it, or put back all of kit %d", quantity, kit.ID)
	}
	var back []inventory.Pick
	for _, pick := range kit.Picks {
		out := pick.Quantity - pick.Returned
		switch {
		case lot == 0 && out > 0:
			back = append(back, inventory.Pick{Lot: pick.Lot, Quantity: out})
		case lot == 0 || pick.Lot != lot:
		case quantity < 1:
			return nil, inventory.Errorf(inventory.Invalid, "at least one piece comes back, not %d", quantity)
		case quantity > out:
			return nil, inventory.Errorf(inventory.Invalid, "%d pieces cannot come back to lot %d: %d of kit %d are out", quantity, lot, out, kit.ID)
		default:
			back = append(back, inventory.Pick{Lot: lot, Quantity: quantity})
		}
	}
	switch {
	case back == nil && lot == 0:
		return nil, inventory.Errorf(inventory.Conflict, "nothing of kit %d is out: it was put back already", kit.ID)
	case back == nil:
		return nil, inventory.Errorf(inventory.Invalid, "kit %d took nothing from lot %d", kit.ID, lot)
	}
	return back, nil
}

// change is a movement of a lot to be booked.
type change struct {
	lot   inventory.Lot
	delta int64
}

// moveKit books the kit's movements and returns them as the ledger has them.
func (d *Drawer) moveKit(ctx context.Context, tx *sql.Tx, kind inventory.MovementKind, kit inventory.KitID, changes []change) ([]inventory.Movement, error) {
	book, err := openLedger(ctx, tx, d)
	if err != nil {
		return nil, err
	}
	var first, last inventory.MovementID
	for _, c := range changes {
		last, err = book.add(entry{kind: kind, lot: c.lot.ID, part: c.lot.Part.Key(), delta: c.delta, onHand: c.lot.OnHand, kit: kit})
		if err != nil {
			return nil, err
		}
		if first == 0 {
			first = last
		}
	}
	return movementsWhere(ctx, tx, "WHERE m.id BETWEEN ? AND ?", first, last)
}
