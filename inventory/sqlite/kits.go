package sqlite

import (
	"context"
	"database/sql"
	"encoding/json"
	"errors"
	"fmt"

	"tickdrawer/inventory"
)

// SaveKit keeps a planned kit and returns its number; where kit.State is
// KitReserved its picks are promised to it in the same transaction. The kit's
// number, time and returned pieces are not read. Errors: Invalid where the boards
// or a pick make no sense; NotFound where a pick's lot does not exist; Shortage
// as Reserve.
func (d *Drawer) SaveKit(ctx context.Context, kit inventory.Kit) (inventory.KitID, error) {
	if err := checkKit(kit); err != nil {
		return 0, err
	}
	err := d.within(ctx, "keep a kit in", func(tx *sql.Tx) error {
		result, err := tx.ExecContext(ctx, "INSERT INTO kit (job, boards, wanted, state, created_at, plan) VALUES (?, ?, ?, ?, ?, ?)",
			kit.Job, kit.Boards, kit.Wanted, string(inventory.KitPlanned), stamp(d.now()), append([]byte{}, kit.Plan...))
		if err != nil {
			return err
		}
		number, err := result.LastInsertId()
		if err != nil {
			return err
		}
		kit.ID = inventory.KitID(number)
		for _, pick := range kit.Picks {
			if err := savePick(ctx, tx, kit.ID, pick); err != nil {
				return err
			}
		}
		if kit.State == inventory.KitReserved {
			return reserve(ctx, tx, kit.ID)
		}
		return nil
	})
	if err != nil {
		return 0, err
	}
	return kit.ID, nil
}

func checkKit(kit inventory.Kit) error {
	switch {
	case kit.State != "" && kit.State != inventory.KitPlanned && kit.State != inventory.KitReserved:
		return inventory.Errorf(inventory.Invalid, "a kit begins planned or reserved, not %s", kit.State)
	case kit.Boards < 0 || kit.Wanted < kit.Boards:
		return inventory.Errorf(inventory.Invalid, "%d boards of %d wanted make no kit", kit.Boards, kit.Wanted)
	}
	seen := map[inventory.LotID]bool{}
	for _, pick := range kit.Picks {
		if pick.Quantity < 1 {
			return inventory.Errorf(inventory.Invalid, "a pick of %d pieces from lot %d cannot be kept", pick.Quantity, pick.Lot)
		}
		if seen[pick.Lot] {
			return inventory.Errorf(inventory.Invalid, "lot %d is picked twice by one kit: add its picks up", pick.Lot)
		}
		seen[pick.Lot] = true
	}
	return nil
}

func savePick(ctx context.Context, tx *sql.Tx, kit inventory.KitID, pick inventory.Pick) error {
	references, err := json.Marshal(append([]string{}, pick.References...))
	if err != nil {
		return err
	}
	// A pick whose lot does not exist inserts nothing.
	result, err := tx.ExecContext(ctx, "INSERT INTO pick (kit_id, lot_id, quantity, designators) SELECT ?, id, ?, ? FROM lot WHERE id = ?",
		kit, pick.Quantity, string(references), pick.Lot)
	if err != nil {
		return fmt.Errorf("pick from lot %d: %w", pick.Lot, err)
	}
	if kept, err := result.RowsAffected(); err != nil || kept == 1 {
		return err
	}
	return noLot(pick.Lot)
}

// Kits returns every kit by number, without its plan and picks.
func (d *Drawer) Kits(ctx context.Context) ([]inventory.Kit, error) {
	kits, err := kitHeads(ctx, d.db)
	return kits, d.explain("read the kits of", err)
}

func kitHeads(ctx context.Context, q querier) ([]inventory.Kit, error) {
	rows, err := q.QueryContext(ctx, "SELECT id, job, boards, wanted, state, created_at FROM kit ORDER BY id")
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var kits []inventory.Kit
	for rows.Next() {
		var kit inventory.Kit
		var at string
		if err := rows.Scan(&kit.ID, &kit.Job, &kit.Boards, &kit.Wanted, &kit.State, &at); err != nil {
			return nil, err
		}
		if kit.CreatedAt, err = parseStamp(at); err != nil {
			return nil, err
		}
		kits = append(kits, kit)
	}
	return kits, rows.Err()
}

// Kit returns the kit with its picks and plan. The error is NotFound where there
// is none.
func (d *Drawer) Kit(ctx context.Context, id inventory.KitID) (inventory.Kit, error) {
	var kit inventory.Kit
	err := d.reading(ctx, "read a kit of", func(q querier) error {
		var err error
		kit, err = kitByID(ctx, q, id)
		return err
	})
	return kit, err
}

func kitByID(ctx context.Context, q querier, id inventory.KitID) (inventory.Kit, error) {
	kit := inventory.Kit{ID: id}
	var at string
	err := q.QueryRowContext(ctx, "SELECT job, boards, wanted, state, created_at, plan FROM kit WHERE id = ?", id).
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
	rows, err := q.QueryContext(ctx, "SELECT lot_id, quantity, returned, designators FROM pick WHERE kit_id = ? ORDER BY lot_id", id)
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
			return kit, fmt.Errorf("references of kit %d, lot %d: %w", id, pick.Lot, err)
		}
		kit.Picks = append(kit.Picks, pick)
	}
	return kit, rows.Err()
}
