package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
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
