package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
)

// writeNew writes a file that must not exist yet; on an error it leaves none.
func writeNew(name string, content []byte) error {
	file, err := os.OpenFile(name, os.O_CREATE|os.O_EXCL|os.O_WRONLY, 0o644)
	if errors.Is(err, fs.ErrExist) {
		return fmt.Errorf("%s exists already and is not replaced: name a new file", name)
	}
	if err != nil {
		return fmt.Errorf("%s: %w", name, systemReason(err))
	}
	_, err = file.Write(content)
	if err = errors.Join(err, file.Close()); err != nil {
		os.Remove(name)
		return fmt.Errorf("%s: %w", name, systemReason(err))
	}
	return nil
}

// replacement is a file that takes its name when it is whole: an older file of the
// name stands until then.
type replacement struct {
	name string
	file *os.File
}

// newReplacement opens a replacement beside the name, so that a folder that
// cannot be written to is found before anything else is done.
func newReplacement(name string) (*replacement, error) {
	if info, err := os.Stat(name); err == nil && !info.Mode().IsRegular() {
		return nil, fmt.Errorf("%s is no file that can be replaced: name another", name)
	}
	file, err := os.CreateTemp(filepath.Dir(name), ".tickdrawer-*")
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, systemReason(err))
	}
	return &replacement{name, file}, nil
}

// finish writes the content and takes the name; on an error nothing is left.
func (r *replacement) finish(content []byte) error {
	_, err := r.file.Write(content)
	if err = errors.Join(err, r.file.Chmod(0o644), r.file.Close()); err == nil {
		err = os.Rename(r.file.Name(), r.name)
	}
	if err != nil {
		os.Remove(r.file.Name())
		return fmt.Errorf("%s: %w", r.name, systemReason(err))
	}
	return nil
}

// drop leaves everything as it was.
func (r *replacement) drop() {
	r.file.Close()
	os.Remove(r.file.Name())
}

func removeAll(files []string) {
	for _, file := range files {
		os.Remove(file)
	}
}

// systemReason returns what the system says without the call and the path.
func systemReason(err error) error {
	var path *fs.PathError
	if errors.As(err, &path) {
		return path.Err
	}
	return err
}
