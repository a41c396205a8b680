package sqlite

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	sqlite3 "github.com/mattn/go-sqlite3"

	"tickdrawer/inventory"
)

// Backup copies the drawer into a new file through SQLite's online backup, while
// others may read and book, and checks the copy before it has its name. Errors:
// Conflict where the file exists; Invalid where it cannot be written or the copy
// does not check out. On any error no file is left.
func (d *Drawer) Backup(ctx context.Context, path string) error {
	drawer, err := os.Stat(d.path)
	if err != nil {
		return inventory.Errorf(inventory.Invalid, "the drawer %s cannot be reached: %v", d.path, reason(err))
	}
	if _, err := os.Lstat(path); err == nil {
		return taken(path)
	} else if !errors.Is(err, fs.ErrNotExist) {
		return inventory.Errorf(inventory.Invalid, "the backup %s cannot be made: %v", path, reason(err))
	}
	// Under another name until it is whole, so that a crash leaves nothing that
	// could be taken for a backup.
	partial, err := os.CreateTemp(filepath.Dir(path), filepath.Base(path)+".*.partial")
	if err != nil {
		return inventory.Errorf(inventory.Invalid, "the backup %s cannot be made: %v", path, reason(err))
	}
	err = errors.Join(partial.Chmod(drawer.Mode().Perm()), partial.Close())
	defer func() {
		for _, suffix := range []string{"", "-journal", "-wal", "-shm"} {
			os.Remove(partial.Name() + suffix)
		}
	}()
	if err != nil {
		return inventory.Errorf(inventory.Invalid, "the backup %s cannot be made: %v", path, reason(err))
	}
	copied := &Drawer{path: path}
	if copied.db, err = sql.Open("sqlite3", dataSource(partial.Name(), false)); err != nil {
		return d.explain("back up", err)
	}
	copied.db.SetMaxOpenConns(1)
	err = copyDatabase(ctx, copied.db, d.db)
	var findings []string
	if err == nil {
		findings, err = copied.Verify(ctx)
	}
	if closing := copied.db.Close(); err == nil {
		err = closing
	}
	if err != nil {
		return copied.explain("write the backup", err)
	}
	if len(findings) > 0 {
		return inventory.Errorf(inventory.Invalid, "the drawer %s cannot be backed up, for the copy is not sound: %s; \"tickdrawer verify\" lists all that is wrong", d.path, findings[0])
	}
	if err := nameNew(partial.Name(), path); err != nil {
		return err
	}
	syncFolder(filepath.Dir(path))
	return nil
}

// syncFolder has the name on the disk too, where the system can: the content is
// there already.
func syncFolder(folder string) {
	if f, err := os.Open(folder); err == nil {
		f.Sync()
		f.Close()
	}
}

func taken(path string) error {
	return inventory.Errorf(inventory.Conflict, "%s exists already: a backup never replaces a file; name a new one", path)
}

// nameNew gives the file its name where nothing has it yet.
func nameNew(partial, path string) error {
	err := os.Link(partial, path)
	if errors.Is(err, fs.ErrExist) {
		return taken(path)
	}
	if err == nil {
		return nil // the caller removes the other name
	}
	// A file system without hard links: the name was free a moment ago.
	if err := os.Rename(partial, path); err != nil {
		return inventory.Errorf(inventory.Invalid, "the backup %s cannot be named: %v", path, reason(err))
	}
	return nil
}

// copyDatabase copies one database into another, as it is at the first step.
func copyDatabase(ctx context.Context, to, from *sql.DB) error {
	return withConnection(ctx, to, func(target *sqlite3.SQLiteConn) error {
		return withConnection(ctx, from, func(source *sqlite3.SQLiteConn) (err error) {
			// A reader's snapshot: without it a booking of another program would
			// make the backup start again, and again.
			if _, err := source.Exec("BEGIN DEFERRED; SELECT COUNT(*) FROM sqlite_schema", nil); err != nil {
				return err
			}
			defer func() {
				if _, ending := source.Exec("ROLLBACK", nil); err == nil {
					err = ending
				}
			}()
			backup, err := target.Backup("main", source, "main")
			if err != nil {
				return err
			}
			const pages = 1000 // a step; between steps the copying can be called off
			for done := false; !done && err == nil; {
				if err = ctx.Err(); err == nil {
					done, err = backup.Step(pages)
				}
			}
			if ending := backup.Finish(); err == nil {
				err = ending
			}
			return err
		})
	})
}

func withConnection(ctx context.Context, db *sql.DB, use func(*sqlite3.SQLiteConn) error) error {
	connection, err := db.Conn(ctx)
	if err != nil {
		return err
	}
	defer connection.Close()
	return connection.Raw(func(driver any) error {
		c, ok := driver.(*sqlite3.SQLiteConn)
		if !ok {
			return fmt.Errorf("the connection is a %T, not SQLite's", driver)
		}
		return use(c)
	})
}
