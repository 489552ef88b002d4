package main

import (
	"errors"
	"fmt"
	"io/fs"
)

func isPathError(err error) bool {
	var p *fs.PathError
	return errors.As(err, &p)
}

// folderError passes an error on and turns the lack of a run's files into what to do about it.
func folderError(dir string, err error) error {
	if errors.Is(err, fs.ErrNotExist) {
		return &usageError{fmt.Errorf("%s: found no run there, expected the folder of one (%w)", dir, err)}
	}
	return err
}
