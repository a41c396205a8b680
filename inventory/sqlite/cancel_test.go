package sqlite

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"sync/atomic"
	"testing"
	"time"

	"tickdrawer/inventory"
)

func TestCalledOffChangesNothing(t *testing.T) {
	d := stocked(t, 10)
	before := contents(t, d)
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := d.Book(ctx, Intake{Files: []IntakeFile{file("x.csv", inventory.Receipt{Part: ohms(t, 1), Quantity: 1})}}); err == nil {
		t.Error("booked though it was called off")
	}
	if _, err := d.Kit(ctx, 1); err == nil {
		t.Error("read though it was called off")
	}
	if err := d.Backup(ctx, filepath.Join(t.TempDir(), "copy")); err == nil {
		t.Error("backed up though it was called off")
	}
	if after := contents(t, d); after != before {
		t.Errorf("the drawer has changed:\n%s", after)
	}
}

// calledOff is a context that is called off when it is asked a number of
// times whether it is.
type calledOff struct {
	context.Context
	looks atomic.Int64
	stop  context.CancelFunc
}

func (c *calledOff) Err() error {
	if c.looks.Add(-1) == 0 {
		c.stop()
	}
	return c.Context.Err()
}

// A booking that is called off between any two rows.
func TestCalledOffMidwayChangesNothing(t *testing.T) {
	d := stocked(t, 10)
	var receipts []inventory.Receipt
	for i := range 200 {
		receipts = append(receipts, inventory.Receipt{Part: ohms(t, float64(i)), Bin: "B", Quantity: 1})
	}
	before := contents(t, d)
	for looks := int64(1); looks < 150; looks += 7 {
		ctx, cancel := context.WithCancel(context.Background())
		off := &calledOff{Context: ctx, stop: cancel}
		off.looks.Store(looks)
		_, err := d.Book(off, Intake{Files: []IntakeFile{file("x.csv", receipts...)}})
		if !errors.Is(err, context.Canceled) {
			t.Fatalf("called off at look %d: %v", looks, err)
		}
		if after := contents(t, d); after != before {
			t.Fatalf("called off at look %d, the drawer has changed:\n%s", looks, after)
		}
	}
	wantSound(t, d)
	book(t, d, Intake{Files: []IntakeFile{file("x.csv", receipts...)}})
}

// Whatever is called off, and whenever: the error is that it was, the drawer is
// sound and goes on working.
func TestCalledOffAtAnyMomentSaysSo(t *testing.T) {
	d := fresh(t)
	var receipts []inventory.Receipt
	for i := range 500 {
		receipts = append(receipts, inventory.Receipt{Part: ohms(t, float64(i)), Bin: "B", Quantity: 1})
	}
	book(t, d, Intake{Files: []IntakeFile{file("x.csv", receipts...)}})
	kit := planned(t, d, inventory.Pick{Lot: 1, Quantity: 1})
	folder := t.TempDir()
	stops := 0
	for name, do := range map[string]func(ctx context.Context, try int) error{
		"open": func(ctx context.Context, try int) error {
			path := filepath.Join(folder, fmt.Sprint("drawer ", try))
			opened, err := Open(ctx, path, Options{Create: true, Now: d.now, Who: "tester"})
			if err == nil {
				opened.Close()
			}
			if err := tryOpen(path, true); err != nil {
				t.Errorf("what was left of a new drawer does not open: %v", err)
			}
			return err
		},
		"book": func(ctx context.Context, _ int) error {
			_, err := d.Book(ctx, Intake{Again: true, Files: []IntakeFile{file("x.csv", receipts...)}})
			return err
		},
		"reserve": func(ctx context.Context, _ int) error {
			err := d.Reserve(ctx, kit)
			if err == nil {
				err = d.Release(context.Background(), kit)
			}
			return err
		},
		"verify":    func(ctx context.Context, _ int) error { _, err := d.Verify(ctx); return err },
		"lots":      func(ctx context.Context, _ int) error { _, err := d.Lots(ctx); return err },
		"movements": func(ctx context.Context, _ int) error { _, err := d.Movements(ctx, Filter{}); return err },
		"kit":       func(ctx context.Context, _ int) error { _, err := d.Kit(ctx, kit); return err },
		"backup": func(ctx context.Context, try int) error {
			path := filepath.Join(folder, fmt.Sprint("backup ", try))
			err := d.Backup(ctx, path)
			if _, missing := os.Stat(path); (missing == nil) != (err == nil) {
				t.Errorf("the backup says %v, its file %v", err, missing)
			}
			return err
		},
	} {
		for try := range 25 {
			ctx, cancel := context.WithTimeout(context.Background(), time.Duration(try*try)*10*time.Microsecond)
			err := do(ctx, try)
			cancel()
			if err != nil && !errors.Is(err, context.DeadlineExceeded) {
				t.Errorf("%s: %v", name, err)
			}
			if err != nil {
				stops++
			}
		}
	}
	if stops < 25 {
		t.Errorf("only %d were called off in time", stops)
	}
	if left, err := filepath.Glob(filepath.Join(folder, "*.partial*")); err != nil || left != nil {
		t.Errorf("left behind: %v, %v", left, err)
	}
	wantSound(t, d)
}
