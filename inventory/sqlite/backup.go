package sqlite

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"io/fs"
	"os"

	sqlite3 "github.com/mattn/go-sqlite3"

	"tickdrawer/inventory"
)

// Backup copies the drawer into a new file through SQLite's online backup, while
// others may read and book, and checks the copy before it says so. Errors:
// Conflict where the file exists; on any error no file is left.
func (d *Drawer) Backup(ctx context.Context, path string) (err error) {
	// The name is taken before anything is written, so that no file is replaced.
	file, err := os.OpenFile(path, os.O_CREATE|os.O_EXCL, 0o644)
	switch {
	case errors.Is(err, fs.ErrExist):
		return inventory.Errorf(inventory.Conflict, "%s exists already: a backup never replaces a file; name a new one", path)
	case err != nil:
		return inventory.Errorf(inventory.Invalid, "the backup %s cannot be made: %v", path, reason(err))
	}
	file.Close()
	defer func() {
		if err != nil {
			for _, suffix := range []string{"", "-wal", "-shm", "-journal"} {
				os.Remove(path + suffix)
			}
		}
	}()
	copied, err := sql.Open("sqlite3", dataSource(path, true))
	if err != nil {
		return d.explain("back up", err)
	}
	defer copied.Close()
	copied.SetMaxOpenConns(1)
	if err := copyDatabase(ctx, copied, d.db); err != nil {
		return d.explain("back up", err)
	}
	check := Drawer{db: copied, path: path}
	findings, err := check.Verify(ctx)
	if err != nil {
		return err
	}
	if len(findings) > 0 {
		return inventory.Errorf(inventory.Invalid, "the backup %s does not check out and was removed: %s", path, findings[0])
	}
	return nil
}

// copyDatabase runs the backup from one database into another.
func copyDatabase(ctx context.Context, to, from *sql.DB) error {
	return withConnection(ctx, to, func(target *sqlite3.SQLiteConn) error {
		return withConnection(ctx, from, func(source *sqlite3.SQLiteConn) error {
			backup, err := target.Backup("main", source, "main")
			if err != nil {
				return err
			}
			done := false
			for !done && err == nil {
				if err = ctx.Err(); err == nil {
					done, err = backup.Step(1000)
				}
			}
			if closing := backup.Finish(); err == nil {
				err = closing
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
