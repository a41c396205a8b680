package sqlite

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
	"tickdrawer/inventory/marking"
)

// noon is when the tests take place.
var noon = time.Date(2026, 3, 14, 12, 0, 0, 0, time.UTC)

// cleaner is a test, or a run of a property.
type cleaner interface {
	rapid.TB
	Cleanup(func())
}

// open returns the drawer in the file, new where there is none; the test closes it.
func open(t cleaner, path string) *Drawer {
	t.Helper()
	d, err := Open(context.Background(), path, Options{Create: true, Now: func() time.Time { return noon }, Who: "tester"})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { d.Close() })
	return d
}

// fresh returns a new drawer.
func fresh(t testing.TB) *Drawer {
	t.Helper()
	return freshIn(t, t.TempDir())
}

// empty is the content of a new drawer; a copy spares the waiting for the disk
// that making one takes.
var empty = sync.OnceValues(func() ([]byte, error) {
	folder, err := os.MkdirTemp("", "drawer")
	if err != nil {
		return nil, err
	}
	defer os.RemoveAll(folder)
	path := filepath.Join(folder, "empty")
	if err := tryOpen(path, true); err != nil {
		return nil, err
	}
	return os.ReadFile(path)
})

// freshIn returns a new drawer in the folder.
func freshIn(t cleaner, folder string) *Drawer {
	t.Helper()
	content, err := empty()
	if err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(folder, "stock.drawer")
	if err := os.WriteFile(path, content, 0o644); err != nil {
		t.Fatal(err)
	}
	return open(t, path)
}

func tryOpen(path string, create bool) error {
	d, err := Open(context.Background(), path, Options{Create: create, Now: func() time.Time { return noon }, Who: "tester"})
	if err == nil {
		err = d.Close()
	}
	return err
}

// ohms returns a resistor of 1 %.
func ohms(t rapid.TB, value float64) inventory.Part {
	t.Helper()
	part, err := inventory.NewPart(inventory.Part{Kind: inventory.Resistor, Value: value, Tolerance: &marking.Tolerance{Minus: 0.01, Plus: 0.01}})
	if err != nil {
		t.Fatal(err)
	}
	return part
}

// file returns an intake file whose content is its name.
func file(name string, receipts ...inventory.Receipt) IntakeFile {
	sum := sha256.Sum256([]byte(name))
	return IntakeFile{Name: name, SHA256: hex.EncodeToString(sum[:]), Receipts: receipts}
}

// book books one file and returns what it did.
func book(t rapid.TB, d *Drawer, intake Intake) Booking {
	t.Helper()
	booking, err := d.Book(context.Background(), intake)
	if err != nil {
		t.Fatal(err)
	}
	return booking
}

// stocked returns a new drawer with lots 1, 2, ... of so many pieces each, in
// bins A1, A2, ...
func stocked(t testing.TB, pieces ...int64) *Drawer {
	t.Helper()
	d := fresh(t)
	stock(t, d, pieces...)
	return d
}

func stock(t rapid.TB, d *Drawer, pieces ...int64) {
	t.Helper()
	var receipts []inventory.Receipt
	for i, n := range pieces {
		receipts = append(receipts, inventory.Receipt{Part: ohms(t, float64(1000*(i+1))), Bin: "A" + string(rune('1'+i)), Quantity: n})
	}
	book(t, d, Intake{Files: []IntakeFile{file("stock.csv", receipts...)}})
}

// lotOf returns the lot's pieces on hand and reserved.
func lotOf(t rapid.TB, d *Drawer, id inventory.LotID) (onHand, reserved int64) {
	t.Helper()
	lot, err := d.Lot(context.Background(), id)
	if err != nil {
		t.Fatal(err)
	}
	return lot.OnHand, lot.Reserved
}

// planned keeps a kit that picks the quantity from each lot.
func planned(t rapid.TB, d *Drawer, picks ...inventory.Pick) inventory.KitID {
	t.Helper()
	id, err := d.SaveKit(context.Background(), inventory.Kit{Job: "beacon", Boards: 1, Wanted: 1, Picks: picks})
	if err != nil {
		t.Fatal(err)
	}
	return id
}

// wantReason fails unless err has the reason and its sentence every part.
func wantReason(t rapid.TB, err error, reason inventory.Reason, parts ...string) {
	t.Helper()
	if err == nil {
		t.Fatalf("no error, want one that says %q", parts)
	}
	if got := inventory.ReasonOf(err); got != reason {
		t.Errorf("%v: reason %d, want %d", err, got, reason)
	}
	for _, part := range parts {
		if !strings.Contains(err.Error(), part) {
			t.Errorf("%v: says nothing of %q", err, part)
		}
	}
}

// wantSound fails where the drawer's own check finds anything.
func wantSound(t rapid.TB, d *Drawer) {
	t.Helper()
	findings, err := d.Verify(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	for _, finding := range findings {
		t.Error(finding)
	}
}
