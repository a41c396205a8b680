package sqlite

import (
	"bytes"
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"tickdrawer/inventory"
)

// Someone who takes the rules away can write anything: the check must find it.
func TestVerifyFindsWhatWasTamperedWith(t *testing.T) {
	for _, c := range []struct{ name, sql, says string }{
		{"a quantity", "UPDATE movement SET delta = delta + 1 WHERE id = 1", "movement 1:"},
		{"a quantity and its balance", "UPDATE movement SET delta = 11, balance = 11 WHERE id = 1; UPDATE lot SET on_hand = 11 WHERE id = 1", "movement 1: the line, or one before it, is not what was booked"},
		{"a time", "UPDATE movement SET at = '2026-03-14T12:00:00.000001Z' WHERE id = 3", "movement 3: the line"},
		{"a name", "UPDATE movement SET who = 'Tester' WHERE id = 2", "movement 2: the line"},
		{"a kind", "UPDATE movement SET kind = 'count' WHERE id = 2", "movement 2: the line"},
		{"a kit", "UPDATE movement SET kind = 'count', kit_id = NULL WHERE id = 4", "kit 2, lot 2: 1 pieces put back, the movements add up to 0"},
		{"a file", "UPDATE movement SET intake_id = NULL WHERE id = 1", "movement 1: the line"},
		{"a file's name", "UPDATE intake SET name = 'other.csv'", "movement 1: the line"},
		{"a lot's part", "UPDATE lot SET part_id = 2 WHERE id = 1", "movement 1: the line"},
		{"a part's field", "UPDATE part SET value = 1001 WHERE id = 1", "part 1: its fields (resistor ohm=1001"},
		{"a part's field and key", "UPDATE part SET value = 1001, key = replace(key, '1000', '1001') WHERE id = 1", "movement 1: the line"},
		{"a movement left out", "DELETE FROM movement WHERE id = 2", "movements 2 to 2 are missing"},
		{"the last movement left out", "DELETE FROM movement WHERE id = 4", "numbers up to 4 and ends with 3"},
		{"the whole ledger left out", "DELETE FROM movement", "numbers up to 4 and ends with 0"},
		{"pieces on hand", "UPDATE lot SET on_hand = 12 WHERE id = 1", "lot 1: 12 pieces on hand, the movements add up to 10"},
		{"pieces reserved", "UPDATE lot SET reserved = 5 WHERE id = 1", "lot 1: 5 pieces reserved, the open reservations add up to 4"},
		{"a reservation lost", "DELETE FROM reservation", "lot 1: 4 pieces reserved, the open reservations add up to 0"},
		{"a reservation freed and its kit left reserved", "UPDATE lot SET reserved = 0 WHERE id = 1; DELETE FROM reservation", "kit 1 is reserved, but of lot 1 it is to hold 4 pieces and holds 0"},
		{"a kit that holds and is not reserved", "UPDATE kit SET state = 'released' WHERE id = 1", "kit 1 holds pieces of lot 1 though it is released"},
		{"a kit that is said to be pulled", "UPDATE kit SET state = 'pulled' WHERE id = 3", "kit 3 is pulled, but of lot 1 it wants 2 pieces and took 0"},
		{"a pick that is said to be pulled", "UPDATE pick SET pulled = 1 WHERE kit_id = 3", "kit 3, lot 1: 1 pieces pulled, the movements add up to 0"},
		{"a lot that is gone", "PRAGMA foreign_keys = off; DELETE FROM lot WHERE id = 1", "table movement, row 1: it refers to a row of lot that does not exist"},
		{"a rule broken", "PRAGMA ignore_check_constraints = on; UPDATE pick SET quantity = 0 WHERE kit_id = 3; PRAGMA ignore_check_constraints = off", "the file: CHECK constraint failed in pick"},
	} {
		t.Run(c.name, func(t *testing.T) {
			ctx := context.Background()
			d := busyDrawer(t)
			wantSound(t, d)
			dropTriggers(t, d)
			if _, err := d.db.Exec(c.sql); err != nil {
				t.Fatal(err)
			}
			findings, err := d.Verify(ctx)
			if err != nil {
				t.Fatal(err)
			}
			if !strings.Contains(strings.Join(findings, "\n"), c.says) {
				t.Errorf("found %q, want %q", findings, c.says)
			}
		})
	}
}

func dropTriggers(t *testing.T, d *Drawer) {
	t.Helper()
	rows, err := d.db.Query("SELECT name FROM sqlite_schema WHERE type = 'trigger'")
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for rows.Next() {
		var name string
		if err := rows.Scan(&name); err != nil {
			t.Fatal(err)
		}
		names = append(names, name)
	}
	if err := rows.Err(); err != nil || len(names) == 0 {
		t.Fatal(names, err)
	}
	for _, name := range names {
		if _, err := d.db.Exec("DROP TRIGGER " + name); err != nil {
			t.Fatal(err)
		}
	}
}

// One byte of the file is changed, anywhere in the cells of the ledger.
func TestVerifyFindsOneChangedByte(t *testing.T) {
	ctx := context.Background()
	d := stocked(t, 10)
	for i := range 20 {
		book(t, d, Intake{Files: []IntakeFile{file("receipt-"+string(rune('a'+i))+".csv", inventory.Receipt{Part: ohms(t, 1000), Bin: "A1", Quantity: 3})}})
	}
	if err := d.Close(); err != nil {
		t.Fatal(err)
	}
	content, err := os.ReadFile(d.path)
	if err != nil {
		t.Fatal(err)
	}
	stampText := []byte("2026-03-14T12:00:00.000000Ztesterreceipt")
	tried := 0
	for at := 0; ; {
		next := bytes.Index(content[at:], stampText)
		if next < 0 {
			break
		}
		at += next
		for _, offset := range []int{0, 18, 30, len(stampText) - 1, len(stampText) + 3, len(stampText) + 12} {
			changed := bytes.Clone(content)
			changed[at+offset] ^= 1
			path := filepath.Join(t.TempDir(), "changed")
			if err := os.WriteFile(path, changed, 0o644); err != nil {
				t.Fatal(err)
			}
			tampered := open(t, path)
			findings, err := tampered.Verify(ctx)
			if err != nil {
				t.Fatal(err)
			}
			if len(findings) == 0 {
				t.Errorf("byte %d changed: nothing was found", at+offset)
			}
			tampered.Close()
			tried++
		}
		at += len(stampText)
	}
	if tried < 6*21 {
		t.Errorf("only %d bytes tried", tried)
	}
}

func TestDamagedFileIsFoundOrRefused(t *testing.T) {
	ctx := context.Background()
	d := stocked(t, 10, 20, 30)
	if err := d.Close(); err != nil {
		t.Fatal(err)
	}
	content, err := os.ReadFile(d.path)
	if err != nil {
		t.Fatal(err)
	}
	const page = 4096
	for at := page; at+page <= len(content); at += page {
		damaged := bytes.Clone(content)
		for i := range page {
			damaged[at+i] = byte(i * 7)
		}
		path := filepath.Join(t.TempDir(), "damaged")
		if err := os.WriteFile(path, damaged, 0o644); err != nil {
			t.Fatal(err)
		}
		var findings []string
		opened, err := Open(ctx, path, Options{Now: d.now, Who: "tester"})
		if err == nil {
			findings, err = opened.Verify(ctx)
			opened.Close()
		}
		if err != nil {
			wantReason(t, err, inventory.Invalid, "the file is damaged: go back to a backup")
		} else if len(findings) == 0 {
			t.Errorf("page at byte %d: nothing was found", at)
		}
	}
}
