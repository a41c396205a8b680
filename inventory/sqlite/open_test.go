package sqlite

import (
	"bytes"
	"context"
	"database/sql"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"

	"tickdrawer/inventory"
)

func TestOpenRefusesWhatIsNoDrawer(t *testing.T) {
	folder := t.TempDir()
	write := func(name string, content []byte) string {
		path := filepath.Join(folder, name)
		if err := os.WriteFile(path, content, 0o644); err != nil {
			t.Fatal(err)
		}
		return path
	}
	foreign := func(name string, statements ...string) string {
		path := filepath.Join(folder, name)
		db, err := sql.Open("sqlite3", path)
		if err != nil {
			t.Fatal(err)
		}
		defer db.Close()
		for _, statement := range statements {
			if _, err := db.Exec(statement); err != nil {
				t.Fatal(err)
			}
		}
		return path
	}
	text := write("parts.csv", []byte(strings.Repeat("kind,value,quantity\n", 100)))
	for _, c := range []struct {
		name, path string
		create     bool
		reason     inventory.Reason
		says       []string
	}{
		{"nothing there", filepath.Join(folder, "none"), false, inventory.NotFound, []string{"there is no drawer at", "tickdrawer import", "--drawer"}},
		{"no folder there", filepath.Join(folder, "no", "where"), false, inventory.NotFound, []string{"there is no drawer at"}},
		{"a folder", folder, true, inventory.Invalid, []string{"is a folder"}},
		{"a device", os.DevNull, true, inventory.Invalid, []string{"no ordinary file"}},
		{"a file where the folder should be", filepath.Join(text, "stock.drawer"), true, inventory.Invalid, []string{"cannot be reached", "not a directory"}},
		{"a text file", text, true, inventory.Invalid, []string{"not a drawer"}},
		{"one byte", write("byte", []byte{0}), true, inventory.Invalid, []string{"not a drawer"}},
		{"an empty file", write("empty", nil), false, inventory.NotFound, []string{"there is no drawer at"}},
		{"a header alone", write("header", []byte("SQLite format 3\x00")), false, inventory.Invalid, []string{"not a drawer"}},
		{"another program's tables", foreign("foreign", "CREATE TABLE song (title TEXT)"), true, inventory.Invalid, []string{"another program", "not a drawer"}},
		{"another program's migrations", foreign("migrated", "CREATE TABLE song (title TEXT)", "CREATE TABLE goose_db_version (version_id INTEGER)"), true, inventory.Invalid, []string{"another program"}},
		{"another program's mark", foreign("marked", "PRAGMA application_id = 7", "CREATE TABLE x (y)", "DROP TABLE x"), true, inventory.Invalid, []string{"another program"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			before, _ := os.ReadFile(c.path)
			wantReason(t, tryOpen(c.path, c.create), c.reason, append(c.says, c.path)...)
			after, _ := os.ReadFile(c.path)
			if !bytes.Equal(before, after) {
				t.Error("the file was changed")
			}
			if _, err := os.Stat(c.path + "-wal"); err == nil {
				t.Error("a log was left beside it")
			}
		})
	}
}

func TestOpenRefusesANewerDrawer(t *testing.T) {
	path := filepath.Join(t.TempDir(), "stock.drawer")
	d := open(t, path)
	if _, err := d.db.Exec("INSERT INTO goose_db_version (version_id, is_applied) VALUES (9000, 1)"); err != nil {
		t.Fatal(err)
	}
	if err := d.Close(); err != nil {
		t.Fatal(err)
	}
	wantReason(t, tryOpen(path, true), inventory.Conflict, "schema 9000", "newer tickdrawer", "use the newer program")
}

func TestOpenRefusesAnOldLibrary(t *testing.T) {
	wantReason(t, checkLibrary(3_051_002), inventory.Conflict, "3.51.2 is older than 3.51.3")
	if err := checkLibrary(3_051_003); err != nil {
		t.Error(err)
	}
}

func TestOpenNeedsAClock(t *testing.T) {
	if _, err := Open(context.Background(), filepath.Join(t.TempDir(), "x"), Options{Create: true}); err == nil {
		t.Error("a drawer without a clock was opened")
	}
}

func TestOpenMakesTheFolderAndTakesAnyName(t *testing.T) {
	for _, name := range []string{"plain", "with space", "50% off?mode=memory#x", "Größe & Co", "a;b", "file:x"} {
		path := filepath.Join(t.TempDir(), "new", "folder", name)
		d := open(t, path)
		stock(t, d, 3)
		if _, err := os.Stat(path); err != nil {
			t.Error(err)
		}
	}
}

func TestDrawerKeepsAllWhenClosed(t *testing.T) {
	path := filepath.Join(t.TempDir(), "stock.drawer")
	d := open(t, path)
	stock(t, d, 10, 20)
	if err := d.Reserve(context.Background(), planned(t, d, inventory.Pick{Lot: 1, Quantity: 4, References: []string{"R2", "R10"}})); err != nil {
		t.Fatal(err)
	}
	before := contents(t, d)
	if err := d.Close(); err != nil {
		t.Fatal(err)
	}
	for _, left := range []string{"-wal", "-shm", "-journal"} {
		if _, err := os.Stat(path + left); err == nil {
			t.Errorf("%s is left beside the closed drawer", left)
		}
	}
	again := open(t, path)
	if after := contents(t, again); after != before {
		t.Errorf("opened again it holds\n%s\nand held\n%s", after, before)
	}
	wantSound(t, again)
}

// The driver may connect again; every connection must keep the promises.
func TestEveryConnectionHasThePragmas(t *testing.T) {
	d := fresh(t)
	for connection := range 2 {
		for _, p := range pragmas {
			var got string
			if err := d.db.QueryRow("PRAGMA " + p.name).Scan(&got); err != nil {
				t.Fatal(err)
			}
			if got != p.want {
				t.Errorf("connection %d: %s is %s, want %s", connection, p.name, got, p.want)
			}
		}
		d.db.SetMaxIdleConns(-1) // closes the connection
		d.db.SetMaxIdleConns(1)
	}
}

// What an older program made is opened with all that was in it.
func TestOpenMigratesFromEveryVersion(t *testing.T) {
	ctx := context.Background()
	provider, err := fresh(t).migrations()
	if err != nil {
		t.Fatal(err)
	}
	versions := []int64{0}
	for _, source := range provider.ListSources() {
		versions = append(versions, source.Version)
	}
	last := versions[len(versions)-1]
	for _, version := range versions {
		path := filepath.Join(t.TempDir(), "stock.drawer")
		db, err := sql.Open("sqlite3", dataSource(path, true))
		if err != nil {
			t.Fatal(err)
		}
		older := &Drawer{db: db, path: path}
		provider, err := older.migrations()
		if err != nil {
			t.Fatal(err)
		}
		if version > 0 {
			if _, err := provider.UpTo(ctx, version); err != nil {
				t.Fatal(err)
			}
		}
		if version == 1 {
			if _, err := db.Exec(`
				INSERT INTO part VALUES (1, 'other number="X"', 'other', 0, NULL, NULL, 'X', 0, 0, '', NULL, '', 0, 0, 0, 0);
				INSERT INTO lot (part_id, bin, measured, note) VALUES (1, 'A1', 0, 'old')`); err != nil {
				t.Fatal(err)
			}
		}
		if err := db.Close(); err != nil {
			t.Fatal(err)
		}
		d := open(t, path)
		if provider, err = d.migrations(); err != nil {
			t.Fatal(err)
		}
		if got, err := provider.GetDBVersion(ctx); err != nil || got != last {
			t.Errorf("from schema %d: now %d (%v), want %d", version, got, err, last)
		}
		wantSound(t, d)
		if lots, err := d.Lots(ctx); err != nil || version == 1 && (len(lots) != 1 || lots[0].Note != "old") {
			t.Errorf("from schema %d: lots %v, %v", version, lots, err)
		}
	}
}

func TestDrawerIsMadeByManyAtOnce(t *testing.T) {
	path := filepath.Join(t.TempDir(), "stock.drawer")
	var group sync.WaitGroup
	for range 8 {
		group.Go(func() {
			if err := tryOpen(path, true); err != nil {
				t.Error(err)
			}
		})
	}
	group.Wait()
	wantSound(t, open(t, path))
}

func TestAnotherProgramsBookingIsWaitedForAndReadBeside(t *testing.T) {
	ctx := context.Background()
	d := busyDrawer(t)
	other := open(t, d.path)
	tx, err := other.db.Begin() // takes the write lock
	if err != nil {
		t.Fatal(err)
	}
	defer tx.Rollback()
	if _, err := d.db.Exec("PRAGMA busy_timeout = 20"); err != nil {
		t.Fatal(err)
	}
	before := contents(t, d) // lots, movements and kits are read at once
	wantSound(t, d)
	if err := d.Backup(ctx, filepath.Join(t.TempDir(), "copy")); err != nil {
		t.Error(err)
	}
	_, err = d.Pull(ctx, 1)
	wantReason(t, err, inventory.Invalid, "another program is booking", "try again", "nothing was changed")
	if strings.Contains(err.Error(), "locked") {
		t.Errorf("%v: not a sentence for people", err)
	}
	if err := tx.Rollback(); err != nil {
		t.Fatal(err)
	}
	if after := contents(t, d); after != before {
		t.Errorf("the drawer has changed:\n%s", after)
	}
	if _, err := d.Pull(ctx, 1); err != nil {
		t.Error(err)
	}
}
