package sqlite

import (
	"context"
	"errors"
	"fmt"
	"io/fs"

	sqlite3 "github.com/mattn/go-sqlite3"

	"tickdrawer/inventory"
)

const inUse = "another program is booking into it: try again when that is done; nothing was changed"

// sentences say what SQLite's errors mean for a person and what to do.
var sentences = map[sqlite3.ErrNo]string{
	sqlite3.ErrNotADB:   "it is not a drawer: name another file",
	sqlite3.ErrCorrupt:  "the file is damaged: go back to a backup",
	sqlite3.ErrCantOpen: "the file cannot be opened: check the folder and its permissions",
	sqlite3.ErrReadonly: "it is read-only: check the permissions of the file and its folder; nothing was changed",
	sqlite3.ErrPerm:     "access is denied: check the permissions of the file and its folder",
	sqlite3.ErrFull:     "the disk is full: make room and try again; nothing was changed",
	sqlite3.ErrIoErr:    "the disk failed or is full: see to it and try again; nothing was changed",
	sqlite3.ErrNomem:    "there is not enough memory; nothing was changed",
	sqlite3.ErrBusy:     inUse,
	sqlite3.ErrLocked:   inUse,
	sqlite3.ErrProtocol: inUse,
}

// explain turns what SQLite says into a sentence for a person; doing is the verb.
func (d *Drawer) explain(doing string, err error) error {
	if err == nil || inventory.ReasonOf(err) != 0 || errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) {
		return err
	}
	var from sqlite3.Error
	if !errors.As(err, &from) {
		return fmt.Errorf("%s %s: %w", doing, d.path, err)
	}
	if sentence, known := sentences[from.Code]; known {
		return inventory.Errorf(inventory.Invalid, "cannot %s %s: %s", doing, d.path, sentence)
	}
	if from.Code == sqlite3.ErrConstraint {
		return inventory.Errorf(inventory.Conflict, "cannot %s %s: its own rules refuse it (%v); nothing was changed", doing, d.path, from)
	}
	return fmt.Errorf("%s %s: %w", doing, d.path, err)
}

// isBusy reports whether another program holds the file.
func isBusy(err error) bool {
	var from sqlite3.Error
	return errors.As(err, &from) && (from.Code == sqlite3.ErrBusy || from.Code == sqlite3.ErrLocked || from.Code == sqlite3.ErrProtocol)
}

// reason returns what the system says without the call and the path.
func reason(err error) error {
	var path *fs.PathError
	if errors.As(err, &path) {
		return path.Err
	}
	return err
}
