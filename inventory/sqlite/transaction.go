package sqlite

import (
	"context"
	"database/sql"
	"database/sql/driver"
	"time"
)

// querier is what reads: a booking's transaction, or a connection that reads.
type querier interface {
	QueryContext(ctx context.Context, query string, args ...any) (*sql.Rows, error)
	QueryRowContext(ctx context.Context, query string, args ...any) *sql.Row
}

// within runs a booking in one transaction that holds the write lock from its
// start; an error undoes all of it.
func (d *Drawer) within(ctx context.Context, doing string, book func(tx *sql.Tx) error) error {
	tx, err := d.db.BeginTx(ctx, nil)
	if err != nil {
		return d.explain(doing, err)
	}
	defer tx.Rollback() // after a commit it does nothing
	if err = book(tx); err == nil {
		err = tx.Commit()
	}
	if err != nil && ctx.Err() != nil {
		return ctx.Err() // not what a statement says that found its transaction gone
	}
	return d.explain(doing, err)
}

// reading runs queries that all see the drawer as it is at the first of them.
// It takes no write lock.
func (d *Drawer) reading(ctx context.Context, doing string, read func(q querier) error) error {
	connection, err := d.db.Conn(ctx)
	if err != nil {
		return d.explain(doing, err)
	}
	defer connection.Close()
	if _, err := connection.ExecContext(ctx, "BEGIN DEFERRED"); err != nil {
		return d.explain(doing, err)
	}
	defer func() {
		if _, err := connection.ExecContext(context.WithoutCancel(ctx), "ROLLBACK"); err != nil {
			connection.Raw(func(any) error { return driver.ErrBadConn }) // never used again
		}
	}()
	return d.explain(doing, read(connection))
}

// stampLayout is RFC 3339 in UTC with six decimals: texts sort as times do.
const stampLayout = "2006-01-02T15:04:05.000000Z"

func stamp(at time.Time) string { return at.UTC().Format(stampLayout) }

func parseStamp(text string) (time.Time, error) { return time.Parse(stampLayout, text) }
