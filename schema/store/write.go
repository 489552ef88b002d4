package store

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"golang.org/x/sys/unix"
)

// WriteFile replaces the file at path by data, durably and as a whole: after
// a crash at any moment the file is the old one or the new one. Its folder
// must be there. It is for the files of a run that change, such as run.json;
// a Store's names never change their content.
func WriteFile(path string, data []byte) error {
	return write(path, data, nil, os.Rename)
}

// temporary begins the name of a file that is being written. A stored name
// has no piece that begins with a dot, so the two never meet.
const temporary = ".writing-"

func isTemporary(base string) bool { return strings.HasPrefix(base, temporary) }

// write stores data beside path, syncs it and gives it its name with
// publish, in an order that leaves nothing half done under path.
func write(path string, data []byte, hook func(string), publish func(temp, path string) error) error {
	f, err := createLocked(filepath.Dir(path))
	if err != nil {
		return err
	}
	defer f.Close()
	defer os.Remove(f.Name()) // not there any more when it was renamed
	if _, err := f.Write(data); err != nil {
		return err
	}
	if err := f.Sync(); err != nil {
		return err
	}
	if hook != nil {
		hook("before-rename")
	}
	if err := publish(f.Name(), path); err != nil {
		return err
	}
	return syncFolder(filepath.Dir(path))
}

// Rename gives a file that is synced its final name in the same folder,
// durably. It is for large files that are not written in one piece.
func Rename(temp, path string) error {
	if err := os.Rename(temp, path); err != nil {
		return err
	}
	if err := syncFolder(filepath.Dir(path)); err != nil {
		return fmt.Errorf("syncing the folder of %s: %w", path, err)
	}
	return nil
}

// createLocked makes a temporary file whose lock says that its writer lives.
// Between making and locking it a cleaner may take it for a dead one's: then
// it has no name any more, and another is made.
func createLocked(dir string) (*os.File, error) {
	for {
		f, err := os.CreateTemp(dir, temporary)
		if err != nil {
			return nil, err
		}
		named, err := lockNamed(f)
		if named {
			return f, nil
		}
		f.Close()
		if err != nil {
			os.Remove(f.Name())
			return nil, fmt.Errorf("lock: %w", err)
		}
	}
}

// lockNamed locks a new file, makes it readable for all, and reports whether
// it still has its name.
func lockNamed(f *os.File) (bool, error) {
	if err := flock(f, unix.LOCK_EX); err != nil {
		return false, err
	}
	var st unix.Stat_t
	if err := unix.Fstat(int(f.Fd()), &st); err != nil {
		return false, err
	}
	if err := f.Chmod(0o644); err != nil {
		return false, err
	}
	return st.Nlink > 0, nil
}

// removeIfDead removes a temporary file that nobody holds the lock of.
func removeIfDead(path string) (bool, error) {
	f, err := os.Open(path)
	if errors.Is(err, fs.ErrNotExist) {
		return false, nil
	}
	if err != nil {
		return false, err
	}
	defer f.Close()
	if err := flock(f, unix.LOCK_EX|unix.LOCK_NB); errors.Is(err, unix.EWOULDBLOCK) {
		return false, nil
	} else if err != nil {
		return false, fmt.Errorf("lock: %w", err)
	}
	err = os.Remove(path) // under the lock: its maker will find it gone
	if errors.Is(err, fs.ErrNotExist) {
		return false, nil
	}
	return err == nil, err
}

// keepFirst gives a file its name unless the name is taken. Where the file
// system has no hard links the last writer wins: its content is the same.
func keepFirst(temp, path string) error {
	return publishBy(os.Link, temp, path)
}

func publishBy(link func(from, to string) error, temp, path string) error {
	err := link(temp, path)
	if err == nil || errors.Is(err, fs.ErrExist) {
		return nil
	}
	return os.Rename(temp, path)
}

// makeFolder makes dir with its parents, durably.
func makeFolder(dir string) error {
	st, err := os.Stat(dir)
	if err == nil && st.IsDir() {
		return nil
	}
	if err == nil {
		return fmt.Errorf("%s: found a file, expected a folder", dir)
	}
	if parent := filepath.Dir(dir); parent != dir {
		if err := makeFolder(parent); err != nil {
			return err
		}
	}
	if err := os.Mkdir(dir, 0o755); err != nil && !errors.Is(err, fs.ErrExist) {
		return err
	}
	return syncFolder(filepath.Dir(dir))
}

func syncFolder(dir string) error {
	d, err := os.Open(dir)
	if err != nil {
		return err
	}
	defer d.Close()
	return d.Sync()
}

func flock(f *os.File, how int) error {
	for {
		err := unix.Flock(int(f.Fd()), how)
		if !errors.Is(err, unix.EINTR) {
			return err
		}
	}
}
