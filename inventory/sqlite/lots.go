package sqlite

import (
	"context"
	"database/sql"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
)

const partColumns = `
	p.kind, p.value, p.tolerance_minus, p.tolerance_plus, p.part_number, p.rating_v, p.rating_w,
	p.dielectric, p.tempco_ppm, p.package, p.forward_v, p.saturation_a, p.ideality, p.series_ohm`

const selectPart = "SELECT id FROM part WHERE key = ?"

const insertPart = `
	INSERT INTO part (key, kind, value, tolerance_minus, tolerance_plus, part_number, rating_v, rating_w,
		dielectric, tempco_ppm, package, forward_v, saturation_a, ideality, series_ohm)
	VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`

// partValues returns what insertPart writes.
func partValues(p inventory.Part) []any {
	var minus, plus, tempco sql.NullFloat64
	if p.Tolerance != nil {
		minus = sql.NullFloat64{Float64: p.Tolerance.Minus, Valid: true}
		plus = sql.NullFloat64{Float64: p.Tolerance.Plus, Valid: true}
	}
	if p.TempcoPPM != nil {
		tempco = sql.NullFloat64{Float64: *p.TempcoPPM, Valid: true}
	}
	return []any{
		p.Key(), string(p.Kind), p.Value, minus, plus, p.PartNumber, p.RatingV, p.RatingW,
		p.Dielectric, tempco, p.Package, p.ForwardV, p.SaturationA, p.Ideality, p.SeriesOhm,
	}
}

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
	lots, err := lotsWhere(ctx, d.db, "ORDER BY l.id")
	return lots, d.explain("read the lots of", err)
}

// Lot returns the lot with the number. The error is NotFound where there is none.
func (d *Drawer) Lot(ctx context.Context, id inventory.LotID) (inventory.Lot, error) {
	lots, err := lotsWhere(ctx, d.db, "WHERE l.id = ?", id)
	if err == nil && len(lots) == 0 {
		err = noLot(id)
	}
	if err != nil {
		return inventory.Lot{}, d.explain("read a lot of", err)
	}
	return lots[0], nil
}

func noLot(id inventory.LotID) error {
	return inventory.Errorf(inventory.NotFound, "there is no lot %d: \"tickdrawer stock\" lists them", id)
}

func lotsWhere(ctx context.Context, q querier, clause string, args ...any) ([]inventory.Lot, error) {
	rows, err := q.QueryContext(ctx, `
		SELECT l.id, l.bin, l.measured, l.unit_cost_micros, l.note, l.on_hand, l.reserved, `+partColumns+`
		FROM lot l JOIN part p ON p.id = l.part_id `+clause, args...)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var lots []inventory.Lot
	for rows.Next() {
		var lot inventory.Lot
		var part partScan
		var cost sql.NullInt64
		targets := []any{&lot.ID, &lot.Bin, &lot.Measured, &cost, &lot.Note, &lot.OnHand, &lot.Reserved}
		if err := rows.Scan(append(targets, part.targets()...)...); err != nil {
			return nil, err
		}
		if cost.Valid {
			micros := inventory.Micros(cost.Int64)
			lot.UnitCost = &micros
		}
		lot.Part = part.scanned()
		lots = append(lots, lot)
	}
	return lots, rows.Err()
}
