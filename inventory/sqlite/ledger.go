package sqlite

import (
	"context"
	"database/sql"
	"time"

	"tickdrawer/inventory"
)

// Filter narrows the movements; a zero field does not.
type Filter struct {
	Lot   inventory.LotID
	Kit   inventory.KitID
	Since time.Time // at it or later
}

// Movements returns the ledger, oldest first.
func (d *Drawer) Movements(ctx context.Context, f Filter) ([]inventory.Movement, error) {
	since := ""
	if !f.Since.IsZero() {
		since = stamp(f.Since)
	}
	movements, err := movementsWhere(ctx, d.db, "WHERE (?1 = 0 OR m.lot_id = ?1) AND (?2 = 0 OR m.kit_id = ?2) AND m.at >= ?3", f.Lot, f.Kit, since)
	return movements, d.explain("read the ledger of", err)
}

func movementsWhere(ctx context.Context, q querier, clause string, args ...any) ([]inventory.Movement, error) {
	rows, err := q.QueryContext(ctx, `
		SELECT m.id, m.at, m.who, m.kind, m.lot_id, m.delta, m.balance, m.kit_id, i.name, l.bin, `+partColumns+`
		FROM movement m JOIN lot l ON l.id = m.lot_id JOIN part p ON p.id = l.part_id LEFT JOIN intake i ON i.id = m.intake_id
		`+clause+` ORDER BY m.id`, args...)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var movements []inventory.Movement
	for rows.Next() {
		var m inventory.Movement
		var at string
		var kit sql.NullInt64
		var source sql.NullString
		var part partScan
		targets := []any{&m.ID, &at, &m.Who, &m.Kind, &m.Lot, &m.Delta, &m.Balance, &kit, &source, &m.Bin}
		if err := rows.Scan(append(targets, part.targets()...)...); err != nil {
			return nil, err
		}
		if m.At, err = parseStamp(at); err != nil {
			return nil, err
		}
		m.Kit, m.Source, m.Part = inventory.KitID(kit.Int64), source.String, part.scanned()
		movements = append(movements, m)
	}
	return movements, rows.Err()
}
