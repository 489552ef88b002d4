package store_test

import (
	"bufio"
	"context"
	"errors"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"betaloom/schema/store"
	"betaloom/schema/store/storetest"
)

// A child process of the tests writes a file and waits to be killed in the
// middle of it.
const childFolder = "BETALOOM_STORE_TEST_CHILD"

func TestMain(m *testing.M) {
	if dir := os.Getenv(childFolder); dir != "" {
		writeAndWait(dir)
	}
	os.Exit(m.Run())
}

func writeAndWait(dir string) {
	s, err := store.Folder(dir)
	if err != nil {
		os.Exit(1)
	}
	s.Hook = func(point string) {
		os.Stdout.WriteString(point + "\n")
		select {} // until it is killed
	}
	s.Put(context.Background(), "parts/child", []byte("half"))
}

func open(t *testing.T) *store.FolderStore {
	t.Helper()
	s, err := store.Folder(t.TempDir())
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func TestFolder(t *testing.T) {
	storetest.Run(t, func(t *testing.T) store.Store { return open(t) })
}

// files lists every file under dir, hidden ones too.
func files(t *testing.T, dir string) []string {
	t.Helper()
	var names []string
	err := filepath.WalkDir(dir, func(path string, d fs.DirEntry, err error) error {
		if err == nil && !d.IsDir() {
			name, _ := filepath.Rel(dir, path)
			names = append(names, name)
		}
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return names
}

func TestFolderLeavesNoTemporary(t *testing.T) {
	dir := t.TempDir()
	s, err := store.Folder(dir)
	if err != nil {
		t.Fatal(err)
	}
	for range 2 {
		if err := s.Put(t.Context(), "parts/a", []byte("x")); err != nil {
			t.Fatal(err)
		}
	}
	for _, content := range []string{"one", "two"} {
		if err := store.WriteFile(filepath.Join(dir, "run.json"), []byte(content)); err != nil {
			t.Fatal(err)
		}
		if b, err := os.ReadFile(filepath.Join(dir, "run.json")); err != nil || string(b) != content {
			t.Fatalf("found %q, %v, expected %q", b, err, content)
		}
	}
	if got := files(t, dir); !slices.Equal(got, []string{"parts/a", "run.json"}) {
		t.Errorf("found %q, expected the two files and no other", got)
	}
}

func TestFailedWriteLeavesNothing(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "run.json") // a folder stands where the file should go
	if err := os.MkdirAll(filepath.Join(target, "full"), 0o755); err != nil {
		t.Fatal(err)
	}
	if err := store.WriteFile(target, []byte("x")); err == nil {
		t.Fatal("expected an error")
	}
	if got := files(t, dir); len(got) > 0 {
		t.Errorf("found %q, expected no file", got)
	}
}

func TestFolderIsAFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "file")
	if err := os.WriteFile(path, nil, 0o644); err != nil {
		t.Fatal(err)
	}
	if _, err := store.Folder(path); err == nil || !strings.Contains(err.Error(), "expected a folder") {
		t.Errorf("found %v, expected an error that says what stands there", err)
	}
}

// A writer killed between writing and renaming leaves a temporary file and
// nothing under the name. While it lives its file stays.
func TestClean(t *testing.T) {
	dir := t.TempDir()
	child := exec.Command(os.Args[0])
	child.Env = append(os.Environ(), childFolder+"="+dir)
	out, err := child.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := child.Start(); err != nil {
		t.Fatal(err)
	}
	line, err := bufio.NewReader(out).ReadString('\n')
	if err != nil || line != "before-rename\n" {
		t.Fatalf("found %q, %v, expected the child at before-rename", line, err)
	}
	s, err := store.Folder(dir)
	if err != nil {
		t.Fatal(err)
	}
	clean := func(want int) {
		t.Helper()
		if n, err := s.Clean(t.Context(), ""); err != nil || n != want {
			t.Errorf("removed %d, %v, expected %d", n, err, want)
		}
	}
	if n := len(files(t, dir)); n != 1 {
		t.Fatalf("found %d files, expected the temporary one", n)
	}
	clean(0) // the writer lives
	if err := child.Process.Kill(); err != nil {
		t.Fatal(err)
	}
	child.Wait() // says that it was killed
	if _, err := s.Get(t.Context(), "parts/child"); !errors.Is(err, store.ErrNotFound) {
		t.Errorf("found %v, expected that nothing stands under the name", err)
	}
	if names, err := s.List(t.Context(), ""); err != nil || len(names) > 0 {
		t.Errorf("found %q, %v, expected that temporary files are not listed", names, err)
	}
	clean(1)
	if got := files(t, dir); len(got) > 0 {
		t.Errorf("found %q after cleaning", got)
	}
}

// The hard link of a published file shares its content with the name: to
// remove it must not harm the file.
func TestCleanAfterLink(t *testing.T) {
	dir := t.TempDir()
	s, err := store.Folder(dir)
	if err != nil {
		t.Fatal(err)
	}
	if err := s.Put(t.Context(), "parts/a", []byte("x")); err != nil {
		t.Fatal(err)
	}
	if err := os.Link(filepath.Join(dir, "parts/a"), filepath.Join(dir, "parts/.writing-1")); err != nil {
		t.Fatal(err)
	}
	if n, err := s.Clean(t.Context(), "parts/"); err != nil || n != 1 {
		t.Errorf("removed %d, %v, expected 1", n, err)
	}
	if b, err := s.Get(t.Context(), "parts/a"); err != nil || string(b) != "x" {
		t.Errorf("found %q, %v, expected the part unharmed", b, err)
	}
}

func TestLock(t *testing.T) {
	path := filepath.Join(t.TempDir(), ".lock")
	release, err := store.Lock(path)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := store.Lock(path); !errors.Is(err, store.ErrLocked) {
		t.Errorf("found %v, expected ErrLocked", err)
	}
	if err := release(); err != nil {
		t.Fatal(err)
	}
	again, err := store.Lock(path)
	if err != nil {
		t.Fatalf("found %v, expected a lock that is free again", err)
	}
	if err := again(); err != nil {
		t.Fatal(err)
	}
}

func TestTile(t *testing.T) {
	for name, want := range map[string]string{
		store.Part("0f"): "0f", store.Aside("0f"): "0f", store.Refused("0f"): "", "parts/0f": "", "0f.parquet": "",
	} {
		t.Run(name, func(t *testing.T) {
			got, ok := store.Tile(name)
			if ok != (want != "") || ok && got != want {
				t.Errorf("found %q, %v, expected %q", got, ok, want)
			}
		})
	}
}
