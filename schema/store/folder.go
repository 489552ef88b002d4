package store

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"golang.org/x/sys/unix"
)

// FolderStore is a Store in a folder of a file system.
type FolderStore struct {
	// Hook, where set, is called with "before-rename" when a file is written
	// and synced but does not stand under its name yet. Tests end the process
	// there.
	Hook func(point string)

	dir string
}

// Folder opens the store in dir, which is made where it is missing.
func Folder(dir string) (*FolderStore, error) {
	dir, err := filepath.Abs(dir)
	if err != nil {
		return nil, fmt.Errorf("store: %w", err)
	}
	if err := makeFolder(dir); err != nil {
		return nil, fmt.Errorf("store: %w", err)
	}
	return &FolderStore{dir: dir}, nil
}

func (s *FolderStore) path(name string) string {
	return filepath.Join(s.dir, filepath.FromSlash(name))
}

// Put implements Store.
func (s *FolderStore) Put(ctx context.Context, name string, data []byte) error {
	if err := s.ready(ctx, name); err != nil {
		return err
	}
	path := s.path(name)
	if err := makeFolder(filepath.Dir(path)); err != nil {
		return fmt.Errorf("store: %s: %w", name, err)
	}
	if err := write(path, data, s.Hook, keepFirst); err != nil {
		return fmt.Errorf("store: %s: %w", name, err)
	}
	return nil
}

// Get implements Store.
func (s *FolderStore) Get(ctx context.Context, name string) ([]byte, error) {
	if err := s.ready(ctx, name); err != nil {
		return nil, err
	}
	data, err := os.ReadFile(s.path(name))
	if absent(err) {
		return nil, fmt.Errorf("store: %s: %w", name, ErrNotFound)
	}
	if err != nil {
		return nil, fmt.Errorf("store: %s: %w", name, err)
	}
	return data, nil
}

// absent reports whether an error says that there is no such file; a file
// where the path needs a folder says so too.
func absent(err error) bool {
	return errors.Is(err, fs.ErrNotExist) || errors.Is(err, unix.ENOTDIR)
}

// Delete implements Store.
func (s *FolderStore) Delete(ctx context.Context, name string) error {
	if err := s.ready(ctx, name); err != nil {
		return err
	}
	err := os.Remove(s.path(name))
	if absent(err) {
		return nil
	}
	if err == nil {
		err = syncFolder(filepath.Dir(s.path(name)))
	}
	if err != nil {
		return fmt.Errorf("store: %s: %w", name, err)
	}
	return nil
}

func (s *FolderStore) ready(ctx context.Context, name string) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	return CheckName(name)
}

// List implements Store. Files whose names no Put could have given, the
// temporary ones among them, are not listed.
func (s *FolderStore) List(ctx context.Context, prefix string) ([]string, error) {
	if err := checkPrefix(prefix); err != nil {
		return nil, err
	}
	folder := prefix[:strings.LastIndexByte(prefix, '/')+1]
	var names []string
	err := s.walk(ctx, folder, func(name string) error {
		if strings.HasPrefix(name, prefix) && CheckName(name) == nil {
			names = append(names, name)
		}
		return nil
	})
	slices.Sort(names)
	return names, err
}

// Clean removes the temporary files under prefix that a dead process has
// left, and counts them. Those of living writers stay, on this machine and
// on others where the file system shares locks.
func (s *FolderStore) Clean(ctx context.Context, prefix string) (removed int, err error) {
	if err := checkPrefix(prefix); err != nil {
		return 0, err
	}
	err = s.walk(ctx, prefix, func(name string) error {
		if !isTemporary(filepath.Base(name)) {
			return nil
		}
		gone, err := removeIfDead(s.path(name))
		if gone {
			removed++
		}
		return err
	})
	return removed, err
}

// walk calls visit with the name of every file under a folder of the store.
func (s *FolderStore) walk(ctx context.Context, folder string, visit func(name string) error) error {
	err := filepath.WalkDir(s.path(folder), func(path string, d fs.DirEntry, err error) error {
		if errors.Is(err, fs.ErrNotExist) {
			return nil // the folder, or a file that went while we looked
		}
		if err == nil {
			err = ctx.Err()
		}
		if err != nil || d.IsDir() {
			return err
		}
		name, err := filepath.Rel(s.dir, path)
		if err != nil {
			return err
		}
		return visit(filepath.ToSlash(name))
	})
	if err != nil {
		return fmt.Errorf("store: %s: %w", folder, err)
	}
	return nil
}
