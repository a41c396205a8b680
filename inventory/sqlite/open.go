// Package sqlite keeps a drawer in one SQLite file. It is the only package that
// speaks SQL.
//
// The rules of the stock are constraints and triggers of the schema (package
// migrations); this package books in transactions that take the write lock at
// their start, so that two programs never promise or pull the same piece. Its
// errors are inventory.Errors where a person can do something about them.
//
// The file's write-ahead log needs a local disk: two machines must not share a
// drawer over a network file system.
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
	"time"

	sqlite3 "github.com/mattn/go-sqlite3"
	"github.com/pressly/goose/v3"

	"tickdrawer/inventory"
	"tickdrawer/migrations"
)

// Options is how a drawer is opened.
type Options struct {
	Create bool             // make the file, and its folder, where it does not exist
	Now    func() time.Time // stamps movements; needed
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

// leastSize is the least page of an SQLite file, in bytes; SQLite takes some
// shorter files for empty ones.
const leastSize = 512

// applicationID stands in the header of every drawer: "tdrs".
const applicationID = 0x74647273

// pragmas are set on every connection, by the driver's parameter where it has
// one, and read back at opening.
var pragmas = []struct{ name, parameter, set, want, why string }{
	{"foreign_keys", "_foreign_keys", "on", "1", "references between tables hold"},
	{"recursive_triggers", "_recursive_triggers", "on", "1", "INSERT OR REPLACE cannot slip past the triggers that protect movements"},
	{"synchronous", "_synchronous", "FULL", "2", "what was acknowledged survives a power cut"},
	{"busy_timeout", "_busy_timeout", "10000", "10000", "two programs take turns instead of failing"},
	{"cache_size", "_cache_size", "-65536", "-65536", "a large booking stays in memory (64 MiB) until it is whole"},
	// The file itself remembers it, and another program's file must not be
	// changed before it is known to be a drawer.
	{"journal_mode", "", "WAL", "wal", "a reader never stops a booking, and a crash leaves the last booking whole"},
}

// Open opens the drawer in the file and brings its schema up to date. The caller
// closes it. Errors: NotFound where there is no drawer yet and opts.Create is not
// set; Conflict where a newer program made it; Invalid where the file is no
// drawer or cannot be written.
func Open(ctx context.Context, path string, opts Options) (*Drawer, error) {
	_, number, _ := sqlite3.Version()
	if err := checkLibrary(number); err != nil {
		return nil, err
	}
	if opts.Now == nil {
		return nil, errors.New("open a drawer: no clock is given")
	}
	if err := checkFile(path, opts.Create); err != nil {
		return nil, err
	}
	d := &Drawer{path: path, now: opts.Now, who: opts.Who}
	var err error
	if d.db, err = sql.Open("sqlite3", dataSource(path, opts.Create)); err != nil {
		return nil, d.explain("open", err)
	}
	// One connection: the goroutines of one program take turns, and the driver
	// sets the pragmas anew should it have to connect again.
	d.db.SetMaxOpenConns(1)
	if err := d.prepare(ctx, opts.Create); err != nil {
		d.db.Close()
		return nil, err
	}
	return d, nil
}

// Close closes the drawer.
func (d *Drawer) Close() error { return d.db.Close() }

func checkLibrary(number int) error {
	if number < leastLibrary {
		return inventory.Errorf(inventory.Conflict, "the SQLite library %s is older than %s, which mends a fault that can lose bookings: build the program with a newer one", libraryVersion(number), libraryVersion(leastLibrary))
	}
	return nil
}

// libraryVersion returns SQLite's version number as people write it: 3.51.3.
func libraryVersion(number int) string {
	return fmt.Sprintf("%d.%d.%d", number/1_000_000, number/1000%1000, number%1000)
}

// checkFile turns what the file system says beforehand into sentences.
func checkFile(path string, create bool) error {
	info, err := os.Stat(path)
	switch {
	case err == nil && info.IsDir():
		return inventory.Errorf(inventory.Invalid, "%s is a folder: name a file", path)
	case err == nil && !info.Mode().IsRegular():
		return inventory.Errorf(inventory.Invalid, "%s is no ordinary file: name another", path)
	case err == nil && 0 < info.Size() && info.Size() < leastSize:
		return inventory.Errorf(inventory.Invalid, "%s is not a drawer: name another file", path)
	case err == nil:
		return nil // SQLite looks into it: to open and close it here would drop the locks of this program's other handles
	case !errors.Is(err, fs.ErrNotExist):
		return inventory.Errorf(inventory.Invalid, "the drawer %s cannot be reached: %v", path, reason(err))
	case !create:
		return missing(path)
	}
	if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
		return inventory.Errorf(inventory.Invalid, "the folder for the drawer %s cannot be made: %v", path, reason(err))
	}
	return nil
}

func missing(path string) error {
	return inventory.Errorf(inventory.NotFound, "there is no drawer at %s: book a parts list with \"tickdrawer import FILE.csv\", or name another drawer with --drawer", path)
}

// dataSource returns the URI with every pragma; the path is quoted, so that no
// character of it is taken for a parameter.
func dataSource(path string, create bool) string {
	absolute, err := filepath.Abs(path)
	if err != nil {
		absolute = path
	}
	query := url.Values{"_txlock": {"immediate"}, "mode": {"rw"}} // a booking takes the write lock before it reads
	if create {
		query.Set("mode", "rwc")
	}
	for _, p := range pragmas {
		if p.parameter != "" {
			query.Set(p.parameter, p.set)
		}
	}
	return (&url.URL{Scheme: "file", Path: filepath.ToSlash(absolute), RawQuery: query.Encode()}).String()
}

// prepare sees that the file is a drawer, sets and reads back the pragmas, and
// migrates.
func (d *Drawer) prepare(ctx context.Context, create bool) error {
	empty, err := d.isEmpty(ctx)
	if err != nil {
		return d.explain("open", err)
	}
	if empty && !create {
		return missing(d.path)
	}
	if err := d.setPragmas(ctx); err != nil {
		return err
	}
	return d.migrate(ctx)
}

// isEmpty reports whether nothing is in the file yet. The error says so where
// another program's tables are, or a newer drawer's.
func (d *Drawer) isEmpty(ctx context.Context) (bool, error) {
	var id, tables, versions int64
	err := d.db.QueryRowContext(ctx, `
		SELECT (SELECT application_id FROM pragma_application_id),
			COUNT(*) FILTER (WHERE name <> 'goose_db_version'),
			COUNT(*) FILTER (WHERE name = 'goose_db_version')
		FROM sqlite_schema WHERE type = 'table' AND name NOT LIKE 'sqlite_%'`).Scan(&id, &tables, &versions)
	if err != nil {
		return false, err
	}
	switch {
	case tables == 0 && (id == 0 || id == applicationID):
		return true, nil
	case id != applicationID || versions == 0:
		return false, inventory.Errorf(inventory.Invalid, "%s is an SQLite file of another program, not a drawer: name another file", d.path)
	}
	var current int64
	if err := d.db.QueryRowContext(ctx, "SELECT MAX(version_id) FROM goose_db_version").Scan(&current); err != nil {
		return false, err
	}
	provider, err := d.migrations()
	if err != nil {
		return false, err
	}
	sources := provider.ListSources()
	if newest := sources[len(sources)-1].Version; current > newest {
		return false, inventory.Errorf(inventory.Conflict, "the drawer %s has schema %d, made by a newer tickdrawer; this one knows up to %d: use the newer program", d.path, current, newest)
	}
	return false, nil
}

// setPragmas sets what the driver has no parameter for, and reads all back.
func (d *Drawer) setPragmas(ctx context.Context) error {
	for _, p := range pragmas {
		query := "PRAGMA " + p.name
		if p.parameter == "" {
			// SQLite answers at once, without its busy timeout, where another
			// program is doing the same.
			set := func() error { _, err := d.db.ExecContext(ctx, query+" = "+p.set); return err }
			if err := d.inTurn(ctx, set); err != nil {
				return d.explain("open", err)
			}
		}
		var got string
		if err := d.db.QueryRowContext(ctx, query).Scan(&got); err != nil {
			return d.explain("open", err)
		}
		if got != p.want {
			return inventory.Errorf(inventory.Invalid, "the drawer %s does not keep %s = %s (it says %s), without which it is not safe that %s: keep it on a local disk", d.path, p.name, p.want, got, p.why)
		}
	}
	return nil
}

// inTurn runs the step again while another program holds the file, for as long
// as the busy timeout.
func (d *Drawer) inTurn(ctx context.Context, step func() error) error {
	const pause, tries = 50 * time.Millisecond, 200
	for try := 1; ; try++ {
		err := step()
		if !isBusy(err) || try == tries {
			return err
		}
		select {
		case <-ctx.Done():
			return ctx.Err()
		case <-time.After(pause):
		}
	}
}

func (d *Drawer) migrations() (*goose.Provider, error) {
	provider, err := goose.NewProvider(goose.DialectSQLite3, d.db, migrations.FS, goose.WithDisableGlobalRegistry(true), goose.WithLogger(goose.NopLogger()))
	if err != nil {
		return nil, fmt.Errorf("read the migrations: %w", err)
	}
	return provider, nil
}

// migrate brings the schema up to date, each migration in its own transaction.
// Another program may be doing the same: what it has done already fails here,
// and the schema is looked at again.
func (d *Drawer) migrate(ctx context.Context) error {
	for {
		provider, err := d.migrations()
		if err != nil {
			return err
		}
		before, newest, err := provider.GetVersions(ctx)
		if err != nil {
			return d.explain("open", err)
		}
		if before >= newest {
			return nil
		}
		_, upErr := provider.Up(ctx)
		if upErr == nil {
			return nil
		}
		after, _, err := provider.GetVersions(ctx)
		if err != nil || after == before {
			return d.explain("bring up to date", upErr)
		}
	}
}
