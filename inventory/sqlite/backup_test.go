package sqlite

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"testing"

	"tickdrawer/inventory"
)

func TestBackupIsTheDrawer(t *testing.T) {
	d := busyDrawer(t)
	path := filepath.Join(t.TempDir(), "monday.backup")
	if err := d.Backup(context.Background(), path); err != nil {
		t.Fatal(err)
	}
	entries, err := os.ReadDir(filepath.Dir(path))
	if err != nil || len(entries) != 1 {
		t.Errorf("the folder holds %v, %v", entries, err)
	}
	copied := open(t, path)
	if got, want := contents(t, copied), contents(t, d); got != want {
		t.Errorf("the copy holds\n%s\nthe drawer\n%s", got, want)
	}
	wantSound(t, copied)
	book(t, copied, Intake{Files: []IntakeFile{file("more.csv", inventory.Receipt{Part: ohms(t, 5), Quantity: 1})}})
	wantSound(t, copied)
}

func TestBackupReplacesNothingAndLeavesNoHalfFile(t *testing.T) {
	ctx := context.Background()
	d := busyDrawer(t)
	folder := t.TempDir()
	there := filepath.Join(folder, "there")
	if err := os.WriteFile(there, []byte("mine"), 0o644); err != nil {
		t.Fatal(err)
	}
	wantReason(t, d.Backup(ctx, there), inventory.Conflict, "exists already", "name a new one")
	wantReason(t, d.Backup(ctx, folder), inventory.Conflict, "exists already")
	wantReason(t, d.Backup(ctx, d.path), inventory.Conflict, "exists already")
	wantReason(t, d.Backup(ctx, filepath.Join(folder, "no", "where")), inventory.Invalid, "cannot be made", "no such file")

	dropTriggers(t, d)
	if _, err := d.db.Exec("UPDATE lot SET on_hand = 11 WHERE id = 1"); err != nil {
		t.Fatal(err)
	}
	wantReason(t, d.Backup(ctx, filepath.Join(folder, "unsound")), inventory.Invalid, "not sound", "lot 1: 11 pieces on hand", "tickdrawer verify")

	entries, err := os.ReadDir(folder)
	if err != nil {
		t.Fatal(err)
	}
	if content, err := os.ReadFile(there); len(entries) != 1 || string(content) != "mine" {
		t.Errorf("the folder holds %v; the file %q, %v", entries, content, err)
	}
}

func TestBackupWhileAnotherBooks(t *testing.T) {
	ctx := context.Background()
	d := stocked(t, 10)
	other := open(t, d.path)
	done := make(chan struct{})
	booked := make(chan error, 1)
	go func() {
		for i := 0; ; i++ {
			select {
			case <-done:
				booked <- nil
				return
			default:
			}
			// Two rows that belong together.
			_, err := other.Book(ctx, Intake{Files: []IntakeFile{file(fmt.Sprint(i),
				inventory.Receipt{Part: ohms(t, 1), Quantity: 1}, inventory.Receipt{Part: ohms(t, 2), Quantity: 1})}})
			if err != nil {
				booked <- err
				return
			}
		}
	}()
	for i := range 10 {
		path := filepath.Join(t.TempDir(), fmt.Sprint(i))
		if err := d.Backup(ctx, path); err != nil {
			t.Error(err)
			break
		}
		copied := open(t, path)
		wantSound(t, copied)
		lots, err := copied.Lots(ctx)
		if err != nil {
			t.Fatal(err)
		}
		if len(lots) == 3 && lots[1].OnHand != lots[2].OnHand {
			t.Errorf("the copy holds half a booking: %d and %d", lots[1].OnHand, lots[2].OnHand)
		}
	}
	close(done)
	if err := <-booked; err != nil {
		t.Error(err)
	}
	wantSound(t, d)
}
