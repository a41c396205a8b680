package sqlite

import (
	"context"
	"errors"
	"fmt"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	sqlite3 "github.com/mattn/go-sqlite3"

	"tickdrawer/inventory"
)

func TestSQLitesErrorsBecomeSentences(t *testing.T) {
	d := &Drawer{path: "/parts/stock.drawer"}
	for _, c := range []struct {
		code sqlite3.ErrNo
		says string
	}{
		{sqlite3.ErrBusy, "cannot book into /parts/stock.drawer: another program is booking into it: try again"},
		{sqlite3.ErrLocked, "another program is booking into it"},
		{sqlite3.ErrProtocol, "another program is booking into it"},
		{sqlite3.ErrFull, "the disk is full: make room"},
		{sqlite3.ErrIoErr, "the disk failed or is full: see to it"},
		{sqlite3.ErrNomem, "not enough memory"},
		{sqlite3.ErrReadonly, "it is read-only: check the permissions"},
		{sqlite3.ErrPerm, "access is denied: check the permissions"},
		{sqlite3.ErrCantOpen, "the file cannot be opened: check the folder"},
		{sqlite3.ErrCorrupt, "the file is damaged: go back to a backup"},
		{sqlite3.ErrNotADB, "it is not a drawer: name another file"},
	} {
		err := d.explain("book into", fmt.Errorf("1 kΩ: %w", sqlite3.Error{Code: c.code}))
		wantReason(t, err, inventory.Invalid, c.says, d.path)
		for _, word := range []string{"sqlite", "locked", "1 kΩ: "} {
			if strings.Contains(err.Error(), word) {
				t.Errorf("%v: says %q", err, word)
			}
		}
	}
	if err := d.explain("book into", nil); err != nil {
		t.Error(err)
	}
	for _, err := range []error{context.Canceled, context.DeadlineExceeded, inventory.Errorf(inventory.NotFound, "there is no lot 5")} {
		if got := d.explain("book into", err); got != err {
			t.Errorf("%v has become %v", err, got)
		}
	}
	if err := d.explain("book into", errors.New("odd")); inventory.ReasonOf(err) != 0 || err.Error() != "book into /parts/stock.drawer: odd" {
		t.Error(err)
	}
}

// A rule that only the database knows is broken by a program's fault: it is
// refused in a sentence all the same.
func TestBrokenRuleIsASentence(t *testing.T) {
	d := stocked(t, 1)
	before := contents(t, d)
	_, err := d.Book(context.Background(), Intake{Files: []IntakeFile{{Name: "x.csv", SHA256: "short"}}})
	wantReason(t, err, inventory.Conflict, "cannot book into "+d.path, "its own rules refuse it", "nothing was changed")
	if after := contents(t, d); after != before {
		t.Errorf("refused, and yet changed:\n%s", after)
	}
}

// SQLite passes over a pragma that it cannot keep, and says nothing.
func TestOpenRefusesAFileThatDoesNotKeepAPragma(t *testing.T) {
	kept := pragmas
	defer func() { pragmas = kept }()
	pragmas = slices.Clone(kept)
	last := &pragmas[len(pragmas)-1]
	last.set, last.want = "NONSENSE", "wal2"
	err := tryOpen(filepath.Join(t.TempDir(), "stock.drawer"), true)
	wantReason(t, err, inventory.Invalid, "does not keep journal_mode = wal2 (it says delete)", "keep it on a local disk")
}
