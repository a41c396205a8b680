// Package sqlite keeps a drawer in one SQLite file. It is the only package that
// speaks SQL.
//
// The rules of the stock are constraints and triggers of the schema (package
// migrations); this package books in transactions that take the write lock at
// their start, so that two programs never promise or pull the same piece. Its
// errors are inventory.Errors where a person can do something about them.
package sqlite

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"io/fs"
	"net/url"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"time"

	sqlite3 "github.com/mattn/go-sqlite3"
	"github.com/pressly/goose/v3"

	"tickdrawer/inventory"
	"tickdrawer/migrations"
)

// Options is how a drawer is opened.
type Options struct {
	Create bool             // make the file, and its folder, where it does not exist
	Now    func() time.Time // stamps movements
	Who    string           // who books
}

// Drawer is an open drawer. It is safe for several goroutines.
type Drawer struct {
	db   *sql.DB
	path string
	now  func() time.Time
	who  string
}

// leastLibrary is the oldest SQLite that is used: 3.51.3 mends a fault by which
// a write-ahead log could be reset while another connection reads it.
const leastLibrary = 3_051_003

// pragmas are set on every connection and read back at opening.
var pragmas = []struct{ name, parameter, set, want, why string }{
	{"foreign_keys", "_foreign_keys", "on", "1", "references between tables hold"},
	{"recursive_triggers", "_recursive_triggers", "on", "1", "INSERT OR REPLACE cannot slip past the triggers that protect movements"},
	{"journal_mode", "_journal_mode", "WAL", "wal", "a reader never stops a booking, and a crash leaves the last booking whole"},
	{"synchronous", "_synchronous", "FULL", "2", "what was acknowledged survives a power cut"},
	{"busy_timeout", "_busy_timeout", "10000", "10000", "two programs take turns instead of failing"},
}

// Open opens the drawer in the file and brings its schema up to date. The caller
// closes it. Errors: NotFound where the file does not exist and opts.Create is
// not set; Conflict where a newer program made it; Invalid where the file is no
// drawer or cannot be written.
func Open(ctx context.Context, path string, opts Options) (*Drawer, error) {
	if _, number, _ := sqlite3.Version(); number < leastLibrary {
		return nil, inventory.Errorf(inventory.Conflict, "the SQLite library %d is older than %d, which mends a fault that can lose bookings: build the program anew", number, leastLibrary)
	}
	if err := checkFile(path, opts.Create); err != nil {
		return nil, err
	}
	d := &Drawer{path: path, now: opts.Now, who: opts.Who}
	var err error
	if d.db, err = sql.Open("sqlite3", dataSource(path, opts.Create)); err != nil {
		return nil, d.explain("open", err)
	}
	d.db.SetMaxOpenConns(1) // one writer; every statement sees the same connection's pragmas
	if err := d.prepare(ctx); err != nil {
		d.db.Close()
		return nil, err
	}
	return d, nil
}

// Close closes the drawer.
func (d *Drawer) Close() error { return d.db.Close() }

// checkFile turns what the file system says beforehand into sentences.
func checkFile(path string, create bool) error {
	info, err := os.Stat(path)
	switch {
	case err == nil && info.IsDir():
		return inventory.Errorf(inventory.Invalid, "%s is a folder: name a file", path)
	case err == nil:
		return nil
	case !errors.Is(err, fs.ErrNotExist):
		return inventory.Errorf(inventory.Invalid, "the drawer %s cannot be reached: %v", path, reason(err))
	case !create:
		return inventory.Errorf(inventory.NotFound, "there is no drawer at %s: book a parts list with \"tickdrawer import FILE.csv\", or name another drawer with --drawer", path)
	}
	if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
		return inventory.Errorf(inventory.Invalid, "the folder for the drawer %s cannot be made: %v", path, reason(err))
	}
	return nil
}

// reason returns what the system says without the call and the path.
func reason(err error) error {
	var path *fs.PathError
	if errors.As(err, &path) {
		return path.Err
	}
	return err
}

// dataSource returns the URI with every pragma; the path is quoted, so that no
// character of it is taken for a parameter.
func dataSource(path string, create bool) string {
	absolute, err := filepath.Abs(path)
	if err != nil {
		absolute = path
	}
	query := url.Values{"_txlock": {"immediate"}, "mode": {"rw"}}
	if create {
		query.Set("mode", "rwc")
	}
	for _, p := range pragmas {
		query.Set(p.parameter, p.set)
	}
	return (&url.URL{Scheme: "file", Path: filepath.ToSlash(absolute), RawQuery: query.Encode()}).String()
}

// prepare reads the pragmas back and migrates.
func (d *Drawer) prepare(ctx context.Context) error {
	for _, p := range pragmas {
		var got string
		if err := d.db.QueryRowContext(ctx, "PRAGMA "+p.name).Scan(&got); err != nil {
			return d.explain("open", err)
		}
		if got != p.want {
			return inventory.Errorf(inventory.Invalid, "the drawer %s does not keep %s = %s (it says %s), without which it is not safe that %s: keep it on a local disk", d.path, p.name, p.want, got, p.why)
		}
	}
	provider, err := goose.NewProvider(goose.DialectSQLite3, d.db, migrations.FS, goose.WithDisableGlobalRegistry(true), goose.WithLogger(goose.NopLogger()))
	if err != nil {
		return fmt.Errorf("read the migrations: %w", err)
	}
	foreign, err := d.isForeign(ctx)
	if err != nil {
		return d.explain("open", err)
	}
	if foreign {
		return inventory.Errorf(inventory.Invalid, "%s is an SQLite file of another program, not a drawer: name another file", d.path)
	}
	current, newest, err := provider.GetVersions(ctx)
	if err != nil {
		return d.explain("open", err)
	}
	if current > newest {
		return inventory.Errorf(inventory.Conflict, "the drawer %s has schema %d, made by a newer tickdrawer; this one knows up to %d: use the newer program", d.path, current, newest)
	}
	if current == newest {
		return nil
	}
	if _, err := provider.Up(ctx); err != nil {
		return d.explain("bring the drawer up to date", err)
	}
	return nil
}

// isForeign reports whether the file has tables but none of a drawer.
func (d *Drawer) isForeign(ctx context.Context) (bool, error) {
	var tables, ours int
	err := d.db.QueryRowContext(ctx, `
		SELECT COUNT(*), COUNT(*) FILTER (WHERE name = 'goose_db_version')
		FROM sqlite_schema WHERE type = 'table' AND name NOT LIKE 'sqlite_%'`).Scan(&tables, &ours)
	return tables > 0 && ours == 0, err
}

// explain turns what SQLite says into a sentence for a person; doing is the verb.
func (d *Drawer) explain(doing string, err error) error {
	if err == nil || inventory.ReasonOf(err) != 0 || errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) {
		return err
	}
	sentence := map[sqlite3.ErrNo]string{
		sqlite3.ErrNotADB:   "it is not a drawer: name another file",
		sqlite3.ErrCorrupt:  "the file is damaged: go back to a backup",
		sqlite3.ErrCantOpen: "the file cannot be opened: check the folder and its permissions",
		sqlite3.ErrReadonly: "it is read-only: check the permissions of the file and its folder",
		sqlite3.ErrPerm:     "access is denied: check the permissions of the file and its folder",
		sqlite3.ErrFull:     "the disk is full: nothing was changed",
		sqlite3.ErrIoErr:    "the disk failed or is full: nothing was changed",
		sqlite3.ErrBusy:     "another program is booking: try again when it is done; nothing was changed",
		sqlite3.ErrLocked:   "another program is booking: try again when it is done; nothing was changed",
	}
	var from sqlite3.Error
	if errors.As(err, &from) {
		if text, known := sentence[from.Code]; known {
			return inventory.Errorf(inventory.Invalid, "cannot %s %s: %s", doing, d.path, text)
		}
	}
	return fmt.Errorf("%s %s: %w", doing, d.path, err)
}

// within runs a booking in one transaction that holds the write lock from its
// start; an error undoes all of it.
func (d *Drawer) within(ctx context.Context, doing string, book func(tx *sql.Tx) error) error {
	tx, err := d.db.BeginTx(ctx, nil)
	if err != nil {
		return d.explain(doing, err)
	}
	defer tx.Rollback() // after a commit it does nothing
	if err := book(tx); err != nil {
		return d.explain(doing, err)
	}
	return d.explain(doing, tx.Commit())
}

// stamp returns the time as the drawer writes it.
func (d *Drawer) stamp() string { return d.now().UTC().Format(time.RFC3339Nano) }

func parseStamp(text string) (time.Time, error) { return time.Parse(time.RFC3339Nano, text) }

// list joins numbers for a sentence.
func list[T ~int64](numbers []T) string {
	texts := make([]string, len(numbers))
	for i, n := range numbers {
		texts[i] = strconv.FormatInt(int64(n), 10)
	}
	return strings.Join(texts, ", ")
}
