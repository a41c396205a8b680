package sqlite

import (
	"context"
	"database/sql"
	"fmt"

	"tickdrawer/inventory"
)

// Filter narrows the movements; a zero field does not.
type Filter struct {
	Lot inventory.LotID
	Kit inventory.KitID
}

// Movements returns the ledger, oldest first.
func (d *Drawer) Movements(ctx context.Context, f Filter) ([]inventory.Movement, error) {
	return d.movements(ctx, "WHERE (? = 0 OR m.lot_id = ?) AND (? = 0 OR m.kit_id = ?)", f.Lot, f.Lot, f.Kit, f.Kit)
}

// movementsBetween returns the movements from the first to the last number.
func (d *Drawer) movementsBetween(ctx context.Context, numbers []inventory.MovementID) ([]inventory.Movement, error) {
	return d.movements(ctx, "WHERE m.id BETWEEN ? AND ?", numbers[0], numbers[len(numbers)-1])
}

func (d *Drawer) movements(ctx context.Context, clause string, args ...any) ([]inventory.Movement, error) {
	rows, err := d.db.QueryContext(ctx, `
		SELECT m.id, m.at, m.who, m.kind, m.lot_id, m.delta, m.balance, m.kit_id, i.name, l.bin, `+partColumns+`
		FROM movement m JOIN lot l ON l.id = m.lot_id JOIN part p ON p.id = l.part_id LEFT JOIN intake i ON i.id = m.intake_id
		`+clause+` ORDER BY m.id`, args...)
	if err != nil {
		return nil, d.explain("read the ledger of", err)
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
			return nil, d.explain("read the ledger of", err)
		}
		if m.At, err = parseStamp(at); err != nil {
			return nil, d.explain("read the ledger of", err)
		}
		m.Kit, m.Source, m.Part = inventory.KitID(kit.Int64), source.String, part.scanned()
		movements = append(movements, m)
	}
	return movements, d.explain("read the ledger of", rows.Err())
}

// Verify recomputes the stock from the ledger and checks the file. It returns a
// sentence for each thing that is wrong, none where all is well.
func (d *Drawer) Verify(ctx context.Context) ([]string, error) {
	var findings []string
	for _, check := range []struct{ query, sentence string }{
		{
			`SELECT l.id, l.on_hand, COALESCE((SELECT SUM(delta) FROM movement WHERE lot_id = l.id), 0) AS booked
			FROM lot l WHERE l.on_hand <> booked ORDER BY l.id`,
			"lot %v: %v pieces on hand, the movements add up to %v",
		}, {
			`SELECT l.id, l.reserved, COALESCE((SELECT SUM(quantity) FROM reservation WHERE lot_id = l.id), 0) AS held
			FROM lot l WHERE l.reserved <> held ORDER BY l.id`,
			"lot %v: %v pieces reserved, the open reservations add up to %v",
		}, {
			`SELECT m.id, m.balance, (SELECT SUM(delta) FROM movement b WHERE b.lot_id = m.lot_id AND b.id <= m.id) AS booked
			FROM movement m WHERE m.balance <> booked ORDER BY m.id`,
			"movement %v: it leaves %v pieces, the movements up to it add up to %v",
		}, {
			`SELECT r.kit_id, r.lot_id, k.state FROM reservation r JOIN kit k ON k.id = r.kit_id WHERE k.state <> 'reserved' ORDER BY 1, 2`,
			"kit %v holds pieces of lot %v though it is %v",
		}, {
			`SELECT "table", COALESCE(rowid, 0), parent FROM pragma_foreign_key_check`,
			"table %v, row %v: it refers to a row of %v that does not exist",
		}, {
			`SELECT integrity_check, '', '' FROM pragma_integrity_check WHERE integrity_check <> 'ok'`,
			"the file: %v%v%v",
		},
	} {
		found, err := d.sentences(ctx, check.query, check.sentence)
		if err != nil {
			return findings, err
		}
		findings = append(findings, found...)
	}
	return findings, nil
}

func (d *Drawer) sentences(ctx context.Context, query, sentence string) ([]string, error) {
	rows, err := d.db.QueryContext(ctx, query)
	if err != nil {
		return nil, d.explain("check", err)
	}
	defer rows.Close()
	var found []string
	for rows.Next() {
		var a, b, c any
		if err := rows.Scan(&a, &b, &c); err != nil {
			return nil, d.explain("check", err)
		}
		found = append(found, fmt.Sprintf(sentence, a, b, c))
	}
	return found, d.explain("check", rows.Err())
}
