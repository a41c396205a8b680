package sqlite

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"slices"
	"strings"

	"tickdrawer/inventory"
)

// IntakeFile is one file's content as receipts.
type IntakeFile struct {
	Name     string
	SHA256   string // of the file's bytes: the same content is not booked twice
	Receipts []inventory.Receipt
}

// Intake is what one import books, all of it or nothing.
type Intake struct {
	Files     []IntakeFile
	Stocktake bool // the quantities say what is there; the difference is booked
	Again     bool // the same content may be booked again
	DryRun    bool // nothing is kept
}

// Booking is what an intake did, or would do.
type Booking struct {
	LotsCreated    int
	QuantityBooked int64 // the sum of what moved: received, or found more less found fewer
	Movements      int
	First, Last    inventory.MovementID // 0 where nothing moved
}

// Book books the intake in one transaction. A receipt tops up the lot of the
// same part, bin and measured value, or begins one; the unit cost becomes the
// latest that is stated, and a note that says something new is added. In a
// stocktake the rows of one lot add up and the lots that no row names stay as
// they are.
//
// Errors: Conflict where the same content was booked before; Shortage where a
// stocktake finds fewer pieces than are reserved.
func (d *Drawer) Book(ctx context.Context, intake Intake) (Booking, error) {
	var b Booking
	dry := errors.New("dry run")
	err := d.within(ctx, "book into", func(tx *sql.Tx) error {
		w, err := newIntakeWriter(ctx, tx, d)
		if err != nil {
			return err
		}
		defer w.close()
		for _, file := range intake.Files {
			if err := w.file(file, intake); err != nil {
				return err
			}
		}
		if err := w.counts(); err != nil {
			return err
		}
		b = w.booking
		if intake.DryRun {
			return dry
		}
		return nil
	})
	if errors.Is(err, dry) {
		err = nil
	}
	if err != nil {
		return Booking{}, err
	}
	return b, nil
}

// intakeWriter books receipts with prepared statements.
type intakeWriter struct {
	ctx                        context.Context
	tx                         *sql.Tx
	d                          *Drawer
	stamp                      string
	booking                    Booking
	parts                      map[string]int64 // by key
	find, create, revise, move *sql.Stmt
	counted                    map[inventory.LotID]count // by lot, of a stocktake
	order                      []inventory.LotID         // in which the lots were counted
}

// count is what a stocktake found in a lot.
type count struct{ pieces, intake int64 }

func newIntakeWriter(ctx context.Context, tx *sql.Tx, d *Drawer) (*intakeWriter, error) {
	w := &intakeWriter{ctx: ctx, tx: tx, d: d, stamp: d.stamp(), parts: map[string]int64{}, counted: map[inventory.LotID]count{}}
	for _, statement := range []struct {
		into **sql.Stmt
		text string
	}{
		{&w.find, "SELECT id, on_hand, note FROM lot WHERE part_id = ? AND bin = ? AND measured = ?"},
		{&w.create, "INSERT INTO lot (part_id, bin, measured, unit_cost_micros, note) VALUES (?, ?, ?, ?, ?)"},
		{&w.revise, "UPDATE lot SET unit_cost_micros = COALESCE(?, unit_cost_micros), note = ? WHERE id = ?"},
		{&w.move, insertMovement},
	} {
		prepared, err := tx.PrepareContext(ctx, statement.text)
		if err != nil {
			w.close()
			return nil, err
		}
		*statement.into = prepared
	}
	return w, nil
}

const insertMovement = "INSERT INTO movement (at, who, kind, lot_id, delta, balance, kit_id, intake_id) VALUES (?, ?, ?, ?, ?, ?, ?, ?)"

func (w *intakeWriter) close() {
	for _, statement := range []*sql.Stmt{w.find, w.create, w.revise, w.move} {
		if statement != nil {
			statement.Close()
		}
	}
}

func (w *intakeWriter) file(file IntakeFile, intake Intake) error {
	if !intake.Again {
		var name, at string
		err := w.tx.QueryRowContext(w.ctx, "SELECT name, booked_at FROM intake WHERE sha256 = ? ORDER BY id LIMIT 1", file.SHA256).Scan(&name, &at)
		if err == nil {
			return inventory.Errorf(inventory.Conflict, "%s was booked already (as %s, %s): nothing was booked; to book the same content once more use --again", file.Name, name, at)
		}
		if !errors.Is(err, sql.ErrNoRows) {
			return err
		}
	}
	result, err := w.tx.ExecContext(w.ctx, "INSERT INTO intake (name, sha256, booked_at, who) VALUES (?, ?, ?, ?)", file.Name, file.SHA256, w.stamp, w.d.who)
	if err != nil {
		return err
	}
	intakeID, err := result.LastInsertId()
	if err != nil {
		return err
	}
	for _, receipt := range file.Receipts {
		lot, onHand, err := w.lot(receipt, intake.Stocktake && receipt.Quantity == 0)
		if err != nil {
			return fmt.Errorf("book %s: %w", receipt.Part.Name(), err)
		}
		if intake.Stocktake {
			if _, counted := w.counted[lot]; !counted && lot != 0 {
				w.order = append(w.order, lot)
			}
			w.counted[lot] = count{w.counted[lot].pieces + receipt.Quantity, intakeID}
			continue
		}
		if err := w.book(inventory.MoveReceipt, lot, receipt.Quantity, onHand, intakeID); err != nil {
			return err
		}
	}
	return nil
}

// lot returns the receipt's lot and what is in it, and begins it where it is
// new, unless none of it is there.
func (w *intakeWriter) lot(receipt inventory.Receipt, none bool) (id inventory.LotID, onHand int64, err error) {
	key := receipt.Part.Key()
	part, known := w.parts[key]
	if !known {
		if part, err = partID(w.ctx, w.tx, receipt.Part); err != nil {
			return 0, 0, err
		}
		w.parts[key] = part
	}
	var cost any
	if receipt.UnitCost != nil {
		cost = int64(*receipt.UnitCost)
	}
	var note string
	err = w.find.QueryRowContext(w.ctx, part, receipt.Bin, receipt.Measured).Scan(&id, &onHand, &note)
	if err == nil {
		if receipt.Note != "" && !strings.Contains(note, receipt.Note) {
			note = strings.TrimPrefix(note+"; "+receipt.Note, "; ")
		}
		_, err = w.revise.ExecContext(w.ctx, cost, note, id)
		return id, onHand, err
	}
	if !errors.Is(err, sql.ErrNoRows) || none {
		if none {
			err = nil
		}
		return 0, 0, err
	}
	result, err := w.create.ExecContext(w.ctx, part, receipt.Bin, receipt.Measured, cost, receipt.Note)
	if err != nil {
		return 0, 0, err
	}
	w.booking.LotsCreated++
	number, err := result.LastInsertId()
	return inventory.LotID(number), 0, err
}

// book adds a movement.
func (w *intakeWriter) book(kind inventory.MovementKind, lot inventory.LotID, delta, onHand, intakeID int64) error {
	result, err := w.move.ExecContext(w.ctx, w.stamp, w.d.who, string(kind), lot, delta, onHand+delta, nil, intakeID)
	if err != nil {
		return err
	}
	number, err := result.LastInsertId()
	if err != nil {
		return err
	}
	if w.booking.First == 0 {
		w.booking.First = inventory.MovementID(number)
	}
	w.booking.Last = inventory.MovementID(number)
	w.booking.Movements++
	w.booking.QuantityBooked += delta
	return nil
}

// counts books what a stocktake found beside what the drawer says.
func (w *intakeWriter) counts() error {
	var held []string
	for _, lot := range w.order {
		var onHand, reserved int64
		if err := w.tx.QueryRowContext(w.ctx, "SELECT on_hand, reserved FROM lot WHERE id = ?", lot).Scan(&onHand, &reserved); err != nil {
			return err
		}
		found := w.counted[lot]
		if found.pieces < reserved {
			kits, err := holders(w.ctx, w.tx, lot)
			if err != nil {
				return err
			}
			held = append(held, fmt.Sprintf("lot %d: %d counted, %d reserved by kit %s", lot, found.pieces, reserved, list(kits)))
			continue
		}
		if found.pieces != onHand {
			if err := w.book(inventory.MoveCount, lot, found.pieces-onHand, onHand, found.intake); err != nil {
				return err
			}
		}
	}
	if held != nil {
		slices.Sort(held)
		return inventory.Errorf(inventory.Shortage, "fewer pieces were counted than are promised; nothing was booked; release the kit first:\n  %s", strings.Join(held, "\n  "))
	}
	return nil
}

// holders returns the kits that hold pieces of the lot.
func holders(ctx context.Context, tx *sql.Tx, lot inventory.LotID) ([]inventory.KitID, error) {
	rows, err := tx.QueryContext(ctx, "SELECT kit_id FROM reservation WHERE lot_id = ? ORDER BY kit_id", lot)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var kits []inventory.KitID
	for rows.Next() {
		var kit inventory.KitID
		if err := rows.Scan(&kit); err != nil {
			return nil, err
		}
		kits = append(kits, kit)
	}
	return kits, rows.Err()
}
