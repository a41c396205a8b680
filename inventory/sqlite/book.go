package sqlite

import (
	"context"
	"database/sql"
	"errors"
	"fmt"

	"tickdrawer/inventory"
)

// MostPieces is the most that a lot holds, so that no sum of pieces overflows.
const MostPieces = 1_000_000_000_000

// IntakeFile is one file's content as receipts.
type IntakeFile struct {
	Name     string
	SHA256   string // of the file's bytes, hexadecimal: the same content is not booked twice
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
// // latest that is stated, and a note that says something new is added; the oldest
// notes give way when they become too long. In a stocktake the rows of one lot
// add up and the lots that no row names stay as they are.
//
// Errors: Invalid where a receipt makes no sense; Conflict where the same content
// was booked before; Shortage where a stocktake finds fewer pieces than are
// reserved.
func (d *Drawer) Book(ctx context.Context, intake Intake) (Booking, error) {
	var b Booking
	dry := errors.New("dry run")
	err := d.within(ctx, "book into", func(tx *sql.Tx) error {
		w, err := newIntakeWriter(ctx, tx, d)
		if err != nil {
			return err
		}
		if err := w.intake(intake); err != nil {
			return err
		}
		b = w.booking
		if intake.DryRun {
			return dry
		}
		return nil
	})
	if err != nil && !errors.Is(err, dry) {
		return Booking{}, err
	}
	return b, nil
}

// intakeWriter books receipts with prepared statements, which close with their
// transaction.
type intakeWriter struct {
	ctx     context.Context // calls off between rows
	row     context.Context // cannot be called off: else the driver spends a goroutine on every statement
	tx      *sql.Tx
	ledger  *ledger
	booking Booking

	parts                                     map[string]int64 // by key
	findPart, addPart, find, create, describe *sql.Stmt

	counted map[inventory.LotID]*count // of a stocktake
	order   []*count                   // as they were first counted
}

// source is the file that is being booked.
type source struct {
	id   int64
	name string
}

// stored is a lot as it is found in the drawer.
type stored struct {
	id               inventory.LotID
	part             string // key
	onHand, reserved int64
	cost             sql.NullInt64
	note             string
}

func newIntakeWriter(ctx context.Context, tx *sql.Tx, d *Drawer) (*intakeWriter, error) {
	w := &intakeWriter{ctx: ctx, row: context.WithoutCancel(ctx), tx: tx, parts: map[string]int64{}, counted: map[inventory.LotID]*count{}}
	for _, statement := range []struct {
		into **sql.Stmt
		text string
	}{
		{&w.findPart, selectPart},
		{&w.addPart, insertPart},
		{&w.find, "SELECT id, on_hand, reserved, unit_cost_micros, note FROM lot WHERE part_id = ? AND bin = ? AND measured = ?"},
		{&w.create, "INSERT INTO lot (part_id, bin, measured, unit_cost_micros, note) VALUES (?, ?, ?, ?, ?)"},
		{&w.describe, "UPDATE lot SET unit_cost_micros = ?, note = ? WHERE id = ?"},
	} {
		prepared, err := tx.PrepareContext(ctx, statement.text)
		if err != nil {
			return nil, err
		}
		*statement.into = prepared
	}
	var err error
	w.ledger, err = openLedger(w.row, tx, d)
	return w, err
}

func (w *intakeWriter) intake(intake Intake) error {
	names := map[string]string{} // by content
	for _, file := range intake.Files {
		if other, twice := names[file.SHA256]; twice && !intake.Again {
			return inventory.Errorf(inventory.Conflict, "%s and %s hold the same content: nothing was booked; name one of them, or use --again to book it twice", other, file.Name)
		}
		names[file.SHA256] = file.Name
	}
	for _, file := range intake.Files {
		from, err := w.source(file, intake.Again)
		if err != nil {
			return err
		}
		for _, receipt := range file.Receipts {
			if err := w.ctx.Err(); err != nil {
				return err
			}
			if err := w.receipt(receipt, from, intake.Stocktake); err != nil {
				if inventory.ReasonOf(err) != 0 {
					return err
				}
				return fmt.Errorf("%s: %w", receipt.Part.Name(), err)
			}
		}
	}
	return w.counts()
}

// source keeps that the file is booked.
func (w *intakeWriter) source(file IntakeFile, again bool) (source, error) {
	if !again {
		var name, at string
		err := w.tx.QueryRowContext(w.ctx, "SELECT name, booked_at FROM intake WHERE sha256 = ? ORDER BY id LIMIT 1", file.SHA256).Scan(&name, &at)
		if err == nil {
			booked, err := parseStamp(at)
			if err != nil {
				return source{}, err
			}
			return source{}, inventory.Errorf(inventory.Conflict, "%s was booked already (as %s, on %s UTC): nothing was booked; to book the same content once more use --again", file.Name, name, booked.Format("2006-01-02 at 15:04"))
		}
		if !errors.Is(err, sql.ErrNoRows) {
			return source{}, err
		}
	}
	result, err := w.tx.ExecContext(w.ctx, "INSERT INTO intake (name, sha256, booked_at, who) VALUES (?, ?, ?, ?)", file.Name, file.SHA256, w.ledger.at, w.ledger.who)
	if err != nil {
		return source{}, err
	}
	id, err := result.LastInsertId()
	return source{id, file.Name}, err
}

// receipt books the receipt, or keeps what it counted.
func (w *intakeWriter) receipt(receipt inventory.Receipt, from source, stocktake bool) error {
	if err := checkReceipt(receipt, stocktake); err != nil {
		return err
	}
	lot, found, err := w.lot(receipt)
	if err != nil {
		return err
	}
	if !found {
		if receipt.Quantity == 0 {
			return nil // none is there, and none was thought to be
		}
		if lot, err = w.begin(receipt); err != nil {
			return err
		}
	}
	if !stocktake {
		if receipt.Quantity > MostPieces-lot.onHand {
			return tooMany(receipt.Part.Name())
		}
		return w.move(inventory.MoveReceipt, lot, receipt.Quantity, from)
	}
	c, counted := w.counted[lot.id]
	if !counted {
		c = &count{lot: lot, name: receipt.Part.Name()}
		w.counted[lot.id] = c
		w.order = append(w.order, c)
	}
	if receipt.Quantity > MostPieces-c.pieces {
		return tooMany(c.name)
	}
	c.pieces += receipt.Quantity
	c.source = from
	return nil
}

// lot returns the receipt's lot where it is in the drawer, with its cost and note
// brought up to date.
func (w *intakeWriter) lot(receipt inventory.Receipt) (stored, bool, error) {
	lot := stored{part: receipt.Part.Key()}
	part, known := w.parts[lot.part]
	if !known {
		err := w.findPart.QueryRowContext(w.row, lot.part).Scan(&part)
		if errors.Is(err, sql.ErrNoRows) {
			return lot, false, nil
		}
		if err != nil {
			return lot, false, err
		}
		w.parts[lot.part] = part
	}
	err := w.find.QueryRowContext(w.row, part, receipt.Bin, receipt.Measured).Scan(&lot.id, &lot.onHand, &lot.reserved, &lot.cost, &lot.note)
	if errors.Is(err, sql.ErrNoRows) {
		return lot, false, nil
	}
	if err != nil {
		return lot, false, err
	}
	cost, note := lot.cost, withNote(lot.note, receipt.Note)
	if receipt.UnitCost != nil {
		cost = sql.NullInt64{Int64: int64(*receipt.UnitCost), Valid: true}
	}
	if cost != lot.cost || note != lot.note {
		_, err = w.describe.ExecContext(w.row, cost, note, lot.id)
	}
	return lot, true, err
}

// begin begins the receipt's lot, with nothing in it yet.
func (w *intakeWriter) begin(receipt inventory.Receipt) (stored, error) {
	lot := stored{part: receipt.Part.Key()}
	part, known := w.parts[lot.part]
	if !known {
		if _, err := inventory.NewPart(receipt.Part); err != nil {
			return lot, err // else the database would refuse it, in its own words
		}
		result, err := w.addPart.ExecContext(w.row, partValues(receipt.Part)...)
		if err != nil {
			return lot, err
		}
		if part, err = result.LastInsertId(); err != nil {
			return lot, err
		}
		w.parts[lot.part] = part
	}
	var cost sql.NullInt64
	if receipt.UnitCost != nil {
		cost = sql.NullInt64{Int64: int64(*receipt.UnitCost), Valid: true}
	}
	result, err := w.create.ExecContext(w.row, part, receipt.Bin, receipt.Measured, cost, receipt.Note)
	if err != nil {
		return lot, err
	}
	number, err := result.LastInsertId()
	lot.id = inventory.LotID(number)
	w.booking.LotsCreated++
	return lot, err
}

// move adds a movement.
func (w *intakeWriter) move(kind inventory.MovementKind, lot stored, delta int64, from source) error {
	number, err := w.ledger.add(entry{kind: kind, lot: lot.id, part: lot.part, delta: delta, onHand: lot.onHand, intake: from.id, source: from.name})
	if err != nil {
		return err
	}
	if w.booking.First == 0 {
		w.booking.First = number
	}
	w.booking.Last = number
	w.booking.Movements++
	w.booking.QuantityBooked += delta
	return nil
}
