package sqlite

import (
	"context"
	"database/sql"
	"encoding/json"
	"errors"
	"fmt"
	"strings"

	"tickdrawer/inventory"
)

// SaveKit keeps a planned kit and returns its number; where kit.State is
// KitReserved its picks are promised to it in the same transaction. The kit's
// number, time and returned pieces are not read. Errors: Invalid where a pick is
// not positive or its lot does not exist; Shortage as Reserve.
func (d *Drawer) SaveKit(ctx context.Context, kit inventory.Kit) (inventory.KitID, error) {
	var id inventory.KitID
	err := d.within(ctx, "keep a kit in", func(tx *sql.Tx) error {
		result, err := tx.ExecContext(ctx, "INSERT INTO kit (job, boards, wanted, state, created_at, plan) VALUES (?, ?, ?, ?, ?, ?)",
			kit.Job, kit.Boards, kit.Wanted, string(inventory.KitPlanned), d.stamp(), append([]byte{}, kit.Plan...))
		if err != nil {
			return err
		}
		number, err := result.LastInsertId()
		if err != nil {
			return err
		}
		id = inventory.KitID(number)
		for _, pick := range kit.Picks {
			if pick.Quantity < 1 {
				return inventory.Errorf(inventory.Invalid, "a pick of %d pieces from lot %d cannot be kept", pick.Quantity, pick.Lot)
			}
			references, err := json.Marshal(append([]string{}, pick.References...))
			if err != nil {
				return err
			}
			_, err = tx.ExecContext(ctx, "INSERT INTO pick (kit_id, lot_id, quantity, designators) VALUES (?, ?, ?, ?)", id, pick.Lot, pick.Quantity, string(references))
			if err != nil {
				return fmt.Errorf("pick from lot %d: %w", pick.Lot, err)
			}
		}
		if kit.State == inventory.KitReserved {
			return reserve(ctx, tx, id)
		}
		return nil
	})
	return id, err
}

// Kits returns every kit by number, without its plan and picks.
func (d *Drawer) Kits(ctx context.Context) ([]inventory.Kit, error) {
	rows, err := d.db.QueryContext(ctx, "SELECT id, job, boards, wanted, state, created_at FROM kit ORDER BY id")
	if err != nil {
		return nil, d.explain("read the kits of", err)
	}
	defer rows.Close()
	var kits []inventory.Kit
	for rows.Next() {
		var kit inventory.Kit
		var at string
		if err := rows.Scan(&kit.ID, &kit.Job, &kit.Boards, &kit.Wanted, &kit.State, &at); err != nil {
			return nil, d.explain("read the kits of", err)
		}
		if kit.CreatedAt, err = parseStamp(at); err != nil {
			return nil, d.explain("read the kits of", err)
		}
		kits = append(kits, kit)
	}
	return kits, d.explain("read the kits of", rows.Err())
}

// Kit returns the kit with its picks and plan. The error is NotFound where there
// is none.
func (d *Drawer) Kit(ctx context.Context, id inventory.KitID) (inventory.Kit, error) {
	var kit inventory.Kit
	err := d.within(ctx, "read a kit of", func(tx *sql.Tx) error {
		var err error
		kit, err = kitByID(ctx, tx, id)
		return err
	})
	return kit, err
}

func kitByID(ctx context.Context, tx *sql.Tx, id inventory.KitID) (inventory.Kit, error) {
	kit := inventory.Kit{ID: id}
	var at string
	err := tx.QueryRowContext(ctx, "SELECT job, boards, wanted, state, created_at, plan FROM kit WHERE id = ?", id).
		Scan(&kit.Job, &kit.Boards, &kit.Wanted, &kit.State, &at, &kit.Plan)
	if errors.Is(err, sql.ErrNoRows) {
		return kit, inventory.Errorf(inventory.NotFound, "there is no kit %d: \"tickdrawer kits\" lists them", id)
	}
	if err != nil {
		return kit, err
	}
	if kit.CreatedAt, err = parseStamp(at); err != nil {
		return kit, err
	}
	rows, err := tx.QueryContext(ctx, "SELECT lot_id, quantity, returned, designators FROM pick WHERE kit_id = ? ORDER BY lot_id", id)
	if err != nil {
		return kit, err
	}
	defer rows.Close()
	for rows.Next() {
		var pick inventory.Pick
		var references string
		if err := rows.Scan(&pick.Lot, &pick.Quantity, &pick.Returned, &references); err != nil {
			return kit, err
		}
		if err := json.Unmarshal([]byte(references), &pick.References); err != nil {
			return kit, err
		}
		kit.Picks = append(kit.Picks, pick)
	}
	return kit, rows.Err()
}

// Reserve promises the picks of a planned or released kit to it. Errors:
// Conflict where the kit is in another state; Shortage, naming every lot that
// has too few available pieces.
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
	if err := enough(ctx, tx, kit); err != nil {
		return err
	}
	for _, pick := range kit.Picks {
		if _, err := tx.ExecContext(ctx, "INSERT INTO reservation (kit_id, lot_id, quantity) VALUES (?, ?, ?)", id, pick.Lot, pick.Quantity); err != nil {
			return err
		}
	}
	return setState(ctx, tx, id, inventory.KitReserved)
}

// enough reports a Shortage where a pick of the kit is more than is available.
func enough(ctx context.Context, tx *sql.Tx, kit inventory.Kit) error {
	var gone []string
	for _, pick := range kit.Picks {
		var available int64
		var bin string
		var part partScan
		targets := append([]any{&available, &bin}, part.targets()...)
		err := tx.QueryRowContext(ctx, "SELECT l.on_hand - l.reserved, l.bin, "+partColumns+" FROM lot l JOIN part p ON p.id = l.part_id WHERE l.id = ?", pick.Lot).Scan(targets...)
		if err != nil {
			return err
		}
		if available < pick.Quantity {
			gone = append(gone, fmt.Sprintf("lot %d (%s, bin %s): %d wanted, %d available, %d missing",
				pick.Lot, part.scanned().Name(), named(bin), pick.Quantity, available, pick.Quantity-available))
		}
	}
	if gone != nil {
		return inventory.Errorf(inventory.Shortage, "kit %d: the stock has changed since it was planned; nothing was changed; plan it again:\n  %s", kit.ID, strings.Join(gone, "\n  "))
	}
	return nil
}

func named(bin string) string {
	if bin == "" {
		return "unnamed"
	}
	return bin
}

// Release frees what a reserved kit holds. The error is Conflict where it holds
// nothing.
func (d *Drawer) Release(ctx context.Context, id inventory.KitID) error {
	return d.within(ctx, "release in", func(tx *sql.Tx) error {
		kit, err := kitByID(ctx, tx, id)
		if err != nil {
			return err
		}
		if kit.State != inventory.KitReserved {
			return inventory.Errorf(inventory.Conflict, "kit %d is %s: it holds nothing to release", id, kit.State)
		}
		return release(ctx, tx, id, inventory.KitReleased)
	})
}

func release(ctx context.Context, tx *sql.Tx, id inventory.KitID, state inventory.KitState) error {
	if _, err := tx.ExecContext(ctx, "DELETE FROM reservation WHERE kit_id = ?", id); err != nil {
		return err
	}
	return setState(ctx, tx, id, state)
}

func setState(ctx context.Context, tx *sql.Tx, id inventory.KitID, state inventory.KitState) error {
	_, err := tx.ExecContext(ctx, "UPDATE kit SET state = ? WHERE id = ?", string(state), id)
	return err
}

// Pull books the picks of a kit out, once, and returns the movements. A reserved
// kit takes what it holds; another takes what is available. Errors: Conflict
// where the kit was pulled before; Shortage, naming every lot that has too few
// pieces, with nothing changed.
func (d *Drawer) Pull(ctx context.Context, id inventory.KitID) ([]inventory.Movement, error) {
	var moved []inventory.MovementID
	err := d.within(ctx, "pull from", func(tx *sql.Tx) error {
		moved = nil
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
		if err := release(ctx, tx, id, inventory.KitPulled); err != nil {
			return err
		}
		if err := enough(ctx, tx, kit); err != nil {
			return err
		}
		for _, pick := range kit.Picks {
			number, err := d.move(ctx, tx, inventory.MovePull, pick.Lot, -pick.Quantity, id)
			if err != nil {
				return err
			}
			moved = append(moved, number)
		}
		return nil
	})
	if err != nil {
		return nil, err
	}
	return d.movementsBetween(ctx, moved)
}

// PutBack books pieces of a pulled kit back: all that is still out, or so many
// of one lot (lot not 0). It returns the movements. Errors: Conflict where the
// kit is not pulled or nothing of it is out; Invalid where more would come back
// than is out, or the kit took nothing from the lot.
func (d *Drawer) PutBack(ctx context.Context, id inventory.KitID, lot inventory.LotID, quantity int64) ([]inventory.Movement, error) {
	var moved []inventory.MovementID
	err := d.within(ctx, "put back into", func(tx *sql.Tx) error {
		moved = nil
		kit, err := kitByID(ctx, tx, id)
		if err != nil {
			return err
		}
		if kit.State != inventory.KitPulled {
			return inventory.Errorf(inventory.Conflict, "kit %d is %s: only a pulled kit can be put back", id, kit.State)
		}
		found := false
		for _, pick := range kit.Picks {
			out := pick.Quantity - pick.Returned
			back := out
			if lot != 0 {
				if pick.Lot != lot {
					continue
				}
				found = true
				if quantity < 1 || quantity > out {
					return inventory.Errorf(inventory.Invalid, "%d pieces cannot come back to lot %d: %d of kit %d are out", quantity, lot, out, id)
				}
				back = quantity
			}
			if back == 0 {
				continue
			}
			if _, err := tx.ExecContext(ctx, "UPDATE pick SET returned = returned + ? WHERE kit_id = ? AND lot_id = ?", back, id, pick.Lot); err != nil {
				return err
			}
			number, err := d.move(ctx, tx, inventory.MovePutback, pick.Lot, back, id)
			if err != nil {
				return err
			}
			moved = append(moved, number)
		}
		if lot != 0 && !found {
			return inventory.Errorf(inventory.Invalid, "kit %d took nothing from lot %d", id, lot)
		}
		if len(moved) == 0 {
			return inventory.Errorf(inventory.Conflict, "nothing of kit %d is out: it was put back already", id)
		}
		return nil
	})
	if err != nil {
		return nil, err
	}
	return d.movementsBetween(ctx, moved)
}

// move adds a kit's movement and returns its number.
func (d *Drawer) move(ctx context.Context, tx *sql.Tx, kind inventory.MovementKind, lot inventory.LotID, delta int64, kit inventory.KitID) (inventory.MovementID, error) {
	var onHand int64
	if err := tx.QueryRowContext(ctx, "SELECT on_hand FROM lot WHERE id = ?", lot).Scan(&onHand); err != nil {
		return 0, err
	}
	result, err := tx.ExecContext(ctx, insertMovement, d.stamp(), d.who, string(kind), lot, delta, onHand+delta, kit, nil)
	if err != nil {
		return 0, err
	}
	number, err := result.LastInsertId()
	return inventory.MovementID(number), err
}
