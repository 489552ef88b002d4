package main

import (
	"errors"
	"fmt"
	"io/fs"

	"betaloom/scheduler"
)

func isPathError(err error) bool {
	var p *fs.PathError
	return errors.As(err, &p)
}

// folderError passes an error on and turns the lack of a run's files into
// what to do about it.
func folderError(dir string, err error) error {
	if !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	if _, record := scheduler.ReadRecord(dir); record != nil {
		return usage("%s: found no run there, expected the folder of one (%w)", dir, err)
	}
	return &endError{exitUnsolved, fmt.Sprintf("%s: its tables are not written yet (%v); betaloom status %s says how far the run is", dir, err, dir)}
}
