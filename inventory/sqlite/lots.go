package sqlite

import (
	"context"
	"database/sql"
	"errors"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
)

const lotColumns = `
	l.id, l.bin, l.measured, l.unit_cost_micros, l.note, l.on_hand, l.reserved, ` + partColumns

const partColumns = `
	p.kind, p.value, p.tolerance_minus, p.tolerance_plus, p.part_number, p.rating_v, p.rating_w,
	p.dielectric, p.tempco_ppm, p.package, p.forward_v, p.saturation_a, p.ideality, p.series_ohm`

// partScan receives partColumns.
type partScan struct {
	part        inventory.Part
	minus, plus sql.NullFloat64
	tempco      sql.NullFloat64
}

func (s *partScan) targets() []any {
	p := &s.part
	return []any{
		&p.Kind, &p.Value, &s.minus, &s.plus, &p.PartNumber, &p.RatingV, &p.RatingW,
		&p.Dielectric, &s.tempco, &p.Package, &p.ForwardV, &p.SaturationA, &p.Ideality, &p.SeriesOhm,
	}
}

func (s *partScan) scanned() inventory.Part {
	if s.minus.Valid {
		s.part.Tolerance = &marking.Tolerance{Minus: s.minus.Float64, Plus: s.plus.Float64}
	}
	if s.tempco.Valid {
		s.part.TempcoPPM = &s.tempco.Float64
	}
	return s.part
}

// Lots returns every lot, empty ones too, by number.
func (d *Drawer) Lots(ctx context.Context) ([]inventory.Lot, error) {
	return d.lots(ctx, "ORDER BY l.id")
}

// Lot returns the lot with the number. The error is NotFound where there is none.
func (d *Drawer) Lot(ctx context.Context, id inventory.LotID) (inventory.Lot, error) {
	lots, err := d.lots(ctx, "WHERE l.id = ?", id)
	if err == nil && len(lots) == 0 {
		err = inventory.Errorf(inventory.NotFound, "there is no lot %d: \"tickdrawer stock\" lists them", id)
	}
	if err != nil {
		return inventory.Lot{}, err
	}
	return lots[0], nil
}

func (d *Drawer) lots(ctx context.Context, clause string, args ...any) ([]inventory.Lot, error) {
	rows, err := d.db.QueryContext(ctx, "SELECT"+lotColumns+" FROM lot l JOIN part p ON p.id = l.part_id "+clause, args...)
	if err != nil {
		return nil, d.explain("read the lots of", err)
	}
	defer rows.Close()
	var lots []inventory.Lot
	for rows.Next() {
		var lot inventory.Lot
		var part partScan
		var cost sql.NullInt64
		targets := []any{&lot.ID, &lot.Bin, &lot.Measured, &cost, &lot.Note, &lot.OnHand, &lot.Reserved}
		if err := rows.Scan(append(targets, part.targets()...)...); err != nil {
			return nil, d.explain("read the lots of", err)
		}
		if cost.Valid {
			micros := inventory.Micros(cost.Int64)
			lot.UnitCost = &micros
		}
		lot.Part = part.scanned()
		lots = append(lots, lot)
	}
	return lots, d.explain("read the lots of", rows.Err())
}

// partID returns the number of the part, which it adds where it is new.
func partID(ctx context.Context, tx *sql.Tx, part inventory.Part) (int64, error) {
	key := part.Key()
	var id int64
	err := tx.QueryRowContext(ctx, "SELECT id FROM part WHERE key = ?", key).Scan(&id)
	if !errors.Is(err, sql.ErrNoRows) {
		return id, err
	}
	var minus, plus, tempco any
	if part.Tolerance != nil {
		minus, plus = part.Tolerance.Minus, part.Tolerance.Plus
	}
	if part.TempcoPPM != nil {
		tempco = *part.TempcoPPM
	}
	result, err := tx.ExecContext(ctx, `
		INSERT INTO part (key, kind, value, tolerance_minus, tolerance_plus, part_number, rating_v, rating_w,
			dielectric, tempco_ppm, package, forward_v, saturation_a, ideality, series_ohm)
		VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
		key, string(part.Kind), part.Value, minus, plus, part.PartNumber, part.RatingV, part.RatingW,
		part.Dielectric, tempco, part.Package, part.ForwardV, part.SaturationA, part.Ideality, part.SeriesOhm)
	if err != nil {
		return 0, err
	}
	return result.LastInsertId()
}
