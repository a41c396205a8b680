package sqlite

import (
	"bytes"
	"context"
	"database/sql"
	"errors"
	"fmt"

	sqlite3 "github.com/mattn/go-sqlite3"
)

// checks find what is wrong by a query each: a row is a finding, its columns go
// into the sentence.
var checks = []struct {
	query, sentence string
	columns         int
}{
	{
		`SELECT integrity_check FROM pragma_integrity_check WHERE integrity_check <> 'ok'`,
		"the file: %v", 1,
	}, {
		`SELECT "table", COALESCE(rowid, 0), parent FROM pragma_foreign_key_check`,
		"table %v, row %v: it refers to a row of %v that does not exist", 3,
	}, {
		`SELECT l.id, l.on_hand, COALESCE(SUM(m.delta), 0) AS booked
		FROM lot l LEFT JOIN movement m ON m.lot_id = l.id GROUP BY l.id HAVING l.on_hand <> booked ORDER BY l.id`,
		"lot %v: %v pieces on hand, the movements add up to %v", 3,
	}, {
		`SELECT l.id, l.reserved, COALESCE(SUM(r.quantity), 0) AS held
		FROM lot l LEFT JOIN reservation r ON r.lot_id = l.id GROUP BY l.id HAVING l.reserved <> held ORDER BY l.id`,
		"lot %v: %v pieces reserved, the open reservations add up to %v", 3,
	}, {
		`SELECT r.kit_id, r.lot_id, k.state FROM reservation r JOIN kit k ON k.id = r.kit_id WHERE k.state <> 'reserved' ORDER BY 1, 2`,
		"kit %v holds pieces of lot %v though it is %v", 3,
	}, {
		`SELECT k.id, p.lot_id, p.quantity - p.pulled AS due, COALESCE(r.quantity, 0) AS held
		FROM kit k JOIN pick p ON p.kit_id = k.id LEFT JOIN reservation r ON r.kit_id = p.kit_id AND r.lot_id = p.lot_id
		WHERE k.state = 'reserved' AND held <> due ORDER BY 1, 2`,
		"kit %v is reserved, but of lot %v it is to hold %v pieces and holds %v", 4,
	}, {
		`SELECT p.kit_id, p.lot_id, p.pulled, COALESCE(-SUM(m.delta), 0) AS booked
		FROM pick p LEFT JOIN movement m ON m.kit_id = p.kit_id AND m.lot_id = p.lot_id AND m.kind = 'pull'
		GROUP BY p.kit_id, p.lot_id HAVING p.pulled <> booked ORDER BY 1, 2`,
		"kit %v, lot %v: %v pieces pulled, the movements add up to %v", 4,
	}, {
		`SELECT p.kit_id, p.lot_id, p.returned, COALESCE(SUM(m.delta), 0) AS booked
		FROM pick p LEFT JOIN movement m ON m.kit_id = p.kit_id AND m.lot_id = p.lot_id AND m.kind = 'putback'
		GROUP BY p.kit_id, p.lot_id HAVING p.returned <> booked ORDER BY 1, 2`,
		"kit %v, lot %v: %v pieces put back, the movements add up to %v", 4,
	}, {
		`SELECT k.id, p.lot_id, p.quantity, p.pulled FROM kit k JOIN pick p ON p.kit_id = k.id WHERE k.state = 'pulled' AND p.pulled <> p.quantity ORDER BY 1, 2`,
		"kit %v is pulled, but of lot %v it wants %v pieces and took %v", 4,
	}, {
		`SELECT seq, (SELECT COALESCE(MAX(id), 0) FROM movement) AS last FROM sqlite_sequence WHERE name = 'movement' AND seq <> last`,
		"the ledger has given out numbers up to %v and ends with %v", 2,
	},
}

// Verify checks the file, recomputes the stock from the ledger and follows the
// chain over its movements, all of one moment. It returns a sentence for each
// thing that is wrong, none where all is well.
func (d *Drawer) Verify(ctx context.Context) ([]string, error) {
	var findings []string
	err := d.reading(ctx, "check", func(q querier) error {
		for _, check := range checks {
			found, err := sentencesOf(ctx, q, check.query, check.sentence, check.columns)
			findings = append(findings, found...)
			if err != nil {
				return damage(&findings, err)
			}
		}
		for _, check := range []func(context.Context, querier) ([]string, error){brokenParts, brokenLinks} {
			found, err := check(ctx, q)
			findings = append(findings, found...)
			if err != nil {
				return damage(&findings, err)
			}
		}
		return nil
	})
	return findings, err
}

// damage adds a finding where the error is that the file is damaged; any other
// error it returns.
func damage(findings *[]string, err error) error {
	var from sqlite3.Error
	if errors.As(err, &from) && (from.Code == sqlite3.ErrCorrupt || from.Code == sqlite3.ErrNotADB) {
		*findings = append(*findings, fmt.Sprintf("the file cannot be read to its end: %v", from))
		return nil
	}
	return err
}

func sentencesOf(ctx context.Context, q querier, query, sentence string, columns int) ([]string, error) {
	rows, err := q.QueryContext(ctx, query)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var found []string
	for rows.Next() {
		values, targets := make([]any, columns), make([]any, columns)
		for i := range values {
			targets[i] = &values[i]
		}
		if err := rows.Scan(targets...); err != nil {
			return found, err
		}
		found = append(found, fmt.Sprintf(sentence, values...))
	}
	return found, rows.Err()
}

// brokenParts finds parts whose fields are not those of their key.
func brokenParts(ctx context.Context, q querier) ([]string, error) {
	rows, err := q.QueryContext(ctx, "SELECT p.id, p.key, "+partColumns+" FROM part p ORDER BY p.id")
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var found []string
	for rows.Next() {
		var id int64
		var key string
		var part partScan
		if err := rows.Scan(append([]any{&id, &key}, part.targets()...)...); err != nil {
			return found, err
		}
		if got := part.scanned().Key(); got != key {
			found = append(found, fmt.Sprintf("part %d: its fields (%s) are not what it was booked as (%s)", id, got, key))
		}
	}
	return found, rows.Err()
}

// brokenLinks follows the ledger from its first movement: numbers without a gap,
// every lot's balance continued, every link that of its line.
func brokenLinks(ctx context.Context, q querier) ([]string, error) {
	rows, err := q.QueryContext(ctx, `
		SELECT m.id, m.at, m.who, m.kind, m.lot_id, m.delta, m.balance, COALESCE(m.kit_id, 0), COALESCE(m.intake_id, 0),
			COALESCE(i.name, ''), COALESCE(p.key, ''), m.link
		FROM movement m LEFT JOIN lot l ON l.id = m.lot_id LEFT JOIN part p ON p.id = l.part_id LEFT JOIN intake i ON i.id = m.intake_id
		ORDER BY m.id`)
	if err != nil {
		return nil, err
	}
	defer rows.Close()
	var found []string
	var previous link
	var last int64
	balances := map[int64]int64{}
	for rows.Next() {
		var l line
		var stored sql.RawBytes
		if err := rows.Scan(&l.id, &l.at, &l.who, &l.kind, &l.lot, &l.delta, &l.balance, &l.kit, &l.intake, &l.source, &l.part, &stored); err != nil {
			return found, err
		}
		if l.id != last+1 {
			found = append(found, fmt.Sprintf("movements %d to %d are missing", last+1, l.id-1))
		}
		if balances[l.lot] += l.delta; l.balance != balances[l.lot] {
			found = append(found, fmt.Sprintf("movement %d: it leaves %d pieces in lot %d, the movements up to it add up to %d", l.id, l.balance, l.lot, balances[l.lot]))
		}
		if linked := previous.next(l); !bytes.Equal(stored, linked[:]) {
			found = append(found, fmt.Sprintf("movement %d: the line, or one before it, is not what was booked", l.id))
		}
		copy(previous[:], stored) // a broken link is reported once
		last = l.id
	}
	return found, rows.Err()
}
