package sqlite

import (
	"context"
	"crypto/sha256"
	"database/sql"
	"errors"
	"fmt"
	"strconv"

	"tickdrawer/inventory"
)

// link ties a movement to all before it: SHA-256 over the link before and the
// line. The first movement follows the zero link.
type link [sha256.Size]byte

// line is a movement as the chain sees it: every column of its row, with the
// part's key and the file's name in place of what can be looked up by them.
type line struct {
	id, lot, delta, balance, kit, intake int64 // kit and intake 0 where none
	at, who, kind, part, source          string
}

// next returns the link of the line that follows this link. A column that a
// later schema adds goes in at the end, and only where it is set, so that older
// links stand.
func (previous link) next(l line) link {
	text := make([]byte, 0, 512)
	text = append(text, previous[:]...)
	for _, field := range []struct {
		name   string
		number int64
	}{{"movement", l.id}, {"lot", l.lot}, {"delta", l.delta}, {"balance", l.balance}, {"kit", l.kit}, {"intake", l.intake}} {
		text = append(append(text, field.name...), '=')
		text = append(strconv.AppendInt(text, field.number, 10), '\n')
	}
	for _, field := range []struct{ name, text string }{{"at", l.at}, {"who", l.who}, {"kind", l.kind}, {"part", l.part}, {"source", l.source}} {
		text = append(append(text, field.name...), '=')
		text = append(strconv.AppendInt(text, int64(len(field.text)), 10), ':') // no text can look like another field
		text = append(append(text, field.text...), '\n')
	}
	return sha256.Sum256(text)
}

// ledger adds movements at the end of the ledger, within one transaction and
// under one time.
type ledger struct {
	ctx     context.Context
	at, who string
	last    int64
	link    link
	insert  *sql.Stmt // belongs to the transaction and closes with it
}

func openLedger(ctx context.Context, tx *sql.Tx, d *Drawer) (*ledger, error) {
	l := &ledger{ctx: ctx, at: stamp(d.now()), who: d.who}
	var previous []byte
	err := tx.QueryRowContext(ctx, "SELECT link FROM movement ORDER BY id DESC LIMIT 1").Scan(&previous)
	if err != nil && !errors.Is(err, sql.ErrNoRows) {
		return nil, err
	}
	copy(l.link[:], previous)
	// The sequence, not the last row: a number is never given out twice.
	err = tx.QueryRowContext(ctx, "SELECT COALESCE((SELECT seq FROM sqlite_sequence WHERE name = 'movement'), 0)").Scan(&l.last)
	if err != nil {
		return nil, err
	}
	l.insert, err = tx.PrepareContext(ctx, `
		INSERT INTO movement (id, at, who, kind, lot_id, delta, balance, kit_id, intake_id, link)
		VALUES (?, ?, ?, ?, ?, ?, ?, NULLIF(?, 0), NULLIF(?, 0), ?)`)
	return l, err
}

// entry is a movement to be added.
type entry struct {
	kind          inventory.MovementKind
	lot           inventory.LotID
	part          string // key
	delta, onHand int64  // on hand before
	kit           inventory.KitID
	intake        int64
	source        string // the intake's name
}

// add adds the movement and returns its number.
func (l *ledger) add(e entry) (inventory.MovementID, error) {
	next := line{
		id: l.last + 1, at: l.at, who: l.who, kind: string(e.kind), lot: int64(e.lot), part: e.part,
		delta: e.delta, balance: e.onHand + e.delta, kit: int64(e.kit), intake: e.intake, source: e.source,
	}
	linked := l.link.next(next)
	_, err := l.insert.ExecContext(l.ctx, next.id, next.at, next.who, next.kind, next.lot, next.delta, next.balance, next.kit, next.intake, linked[:])
	if err != nil {
		return 0, fmt.Errorf("movement of %d pieces, lot %d: %w", e.delta, e.lot, err)
	}
	l.last, l.link = next.id, linked
	return inventory.MovementID(next.id), nil
}
