package store

import (
	"errors"
	"fmt"
	"io/fs"
	"os"

	"golang.org/x/sys/unix"
)

// ErrLocked says that another process holds a lock.
var ErrLocked = errors.New("locked by another process")

// Lock takes the lock whose file is at path, or fails with ErrLocked at
// once. The kernel releases it when the process ends, however it ends; the
// file stays.
func Lock(path string) (release func() error, err error) {
	f, err := os.OpenFile(path, os.O_RDWR|os.O_CREATE, 0o644)
	if err != nil {
		return nil, fmt.Errorf("lock: %w", err)
	}
	err = flock(f, unix.LOCK_EX|unix.LOCK_NB)
	if err == nil {
		return f.Close, nil
	}
	f.Close()
	if errors.Is(err, unix.EWOULDBLOCK) {
		err = ErrLocked
	}
	return nil, fmt.Errorf("lock: %s: %w", path, err)
}

// Locked reports whether another process holds the lock of path. It needs no
// more than to read it.
func Locked(path string) (bool, error) {
	f, err := os.Open(path)
	if errors.Is(err, fs.ErrNotExist) {
		return false, nil
	}
	if err != nil {
		return false, fmt.Errorf("lock: %w", err)
	}
	defer f.Close()
	err = flock(f, unix.LOCK_SH|unix.LOCK_NB)
	if errors.Is(err, unix.EWOULDBLOCK) {
		return true, nil
	}
	if err != nil {
		return false, fmt.Errorf("lock: %s: %w", path, err)
	}
	return false, nil
}
