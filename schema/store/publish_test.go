package store

import (
	"errors"
	"os"
	"path/filepath"
	"testing"
)

// Without hard links the file gets its name by renaming.
func TestPublishWithoutLinks(t *testing.T) {
	dir := t.TempDir()
	temp, path := filepath.Join(dir, ".writing-1"), filepath.Join(dir, "a")
	if err := os.WriteFile(temp, []byte("x"), 0o644); err != nil {
		t.Fatal(err)
	}
	none := func(string, string) error { return errors.New("no links here") }
	if err := publishBy(none, temp, path); err != nil {
		t.Fatal(err)
	}
	if b, err := os.ReadFile(path); err != nil || string(b) != "x" {
		t.Errorf("found %q, %v, expected the content", b, err)
	}
	if _, err := os.Stat(temp); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("found %v, expected that the temporary name is gone", err)
	}
}

// A cleaner that comes between making and locking a temporary file wins; the
// writer notices and makes another.
func TestCleanerBeforeLock(t *testing.T) {
	dir := t.TempDir()
	f, err := os.CreateTemp(dir, temporary) // made, not locked yet
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if gone, err := removeIfDead(f.Name()); err != nil || !gone {
		t.Fatalf("removed %v, %v, expected that an unlocked file counts as dead", gone, err)
	}
	if named, err := lockNamed(f); err != nil || named {
		t.Errorf("found named %v, %v, expected that the writer sees its file gone", named, err)
	}
	g, err := createLocked(dir)
	if err != nil {
		t.Fatal(err)
	}
	defer g.Close()
	if gone, err := removeIfDead(g.Name()); err != nil || gone {
		t.Errorf("removed %v, %v, expected that a locked file stays", gone, err)
	}
}
