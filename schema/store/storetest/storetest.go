// Package storetest holds what every store.Store must pass. A new store is
// held to its contract by a test that calls Run.
package storetest

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"slices"
	"strings"
	"sync"
	"testing"

	"betaloom/schema/store"
)

// Run holds a store to the contract. open gives an empty store; each case
// gets its own.
func Run(t *testing.T, open func(t *testing.T) store.Store) {
	cases := []struct {
		name string
		run  func(t *testing.T, s store.Store)
	}{
		{"what is put is got", roundTrip},
		{"a second put keeps the first content", putTwice},
		{"a missing name is ErrNotFound", missing},
		{"delete removes and may be repeated", remove},
		{"list gives the names under a prefix in order", list},
		{"names that could leave the store are refused", badNames},
		{"writers of one name at one time agree", concurrent},
		{"an ended context stops every call", ended},
		{"what is got belongs to the caller", owned},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) { c.run(t, open(t)) })
	}
}

func put(t *testing.T, s store.Store, name string, data []byte) {
	t.Helper()
	if err := s.Put(t.Context(), name, data); err != nil {
		t.Fatalf("put %s: %v", name, err)
	}
}

func get(t *testing.T, s store.Store, name string) []byte {
	t.Helper()
	b, err := s.Get(t.Context(), name)
	if err != nil {
		t.Fatalf("get %s: %v", name, err)
	}
	return b
}

func roundTrip(t *testing.T, s store.Store) {
	big := bytes.Repeat([]byte{0, 1, 0xff, '\n'}, 1<<18) // larger than any buffer on the way
	for name, data := range map[string][]byte{
		"a": []byte("one"), "empty": {}, "parts/0f.parquet": big, "deep/er/and/deep-er_still.json": []byte("{}"),
		strings.Repeat("x/", 100) + "y": []byte("long"),
	} {
		put(t, s, name, data)
		if !bytes.Equal(get(t, s, name), data) {
			t.Errorf("%s: found other bytes than were put", name)
		}
	}
}

func putTwice(t *testing.T, s store.Store) {
	put(t, s, "parts/a", []byte("first"))
	put(t, s, "parts/a", []byte("first"))
	if got := get(t, s, "parts/a"); string(got) != "first" {
		t.Errorf("found %q after the same content was put again", got)
	}
	put(t, s, "parts/a", []byte("other"))
	if got := get(t, s, "parts/a"); string(got) != "first" {
		t.Errorf("found %q, expected that the first durable content stands", got)
	}
}

func missing(t *testing.T, s store.Store) {
	put(t, s, "parts/a", []byte("x"))
	for _, name := range []string{"parts/b", "nothing/here", "parts/a/b"} {
		if _, err := s.Get(t.Context(), name); !errors.Is(err, store.ErrNotFound) {
			t.Errorf("%s: found %v, expected ErrNotFound", name, err)
		}
	}
}

func remove(t *testing.T, s store.Store) {
	put(t, s, "parts/a", []byte("old"))
	for range 2 {
		if err := s.Delete(t.Context(), "parts/a"); err != nil {
			t.Fatal(err)
		}
	}
	if _, err := s.Get(t.Context(), "parts/a"); !errors.Is(err, store.ErrNotFound) {
		t.Errorf("found %v after delete, expected ErrNotFound", err)
	}
	put(t, s, "parts/a", []byte("new"))
	if got := get(t, s, "parts/a"); string(got) != "new" {
		t.Errorf("found %q, expected what was put after delete", got)
	}
}

func list(t *testing.T, s store.Store) {
	for _, name := range []string{"parts/c", "parts/a", "partial", "aside/x.json", "parts/deep/b"} {
		put(t, s, name, []byte(name))
	}
	for prefix, want := range map[string][]string{
		"":        {"aside/x.json", "partial", "parts/a", "parts/c", "parts/deep/b"},
		"parts/":  {"parts/a", "parts/c", "parts/deep/b"},
		"part":    {"partial", "parts/a", "parts/c", "parts/deep/b"},
		"parts/c": {"parts/c"},
		"other/":  nil,
	} {
		got, err := s.List(t.Context(), prefix)
		if err != nil || !slices.Equal(got, want) {
			t.Errorf("prefix %q: found %q, %v, expected %q", prefix, got, err, want)
		}
	}
}

func badNames(t *testing.T, s store.Store) {
	for _, name := range []string{
		"", "/", "/etc/passwd", "..", "../x", "a/../../x", "a/./b", "a//b", "a/", ".hidden", "a/.writing-1",
		"A", "a b", "a\x00b", "a\\b", "\u00e4", strings.Repeat("n", store.MaxName+1),
	} {
		if err := s.Put(t.Context(), name, nil); err == nil {
			t.Errorf("put of %.40q: expected an error", name)
		}
		if _, err := s.Get(t.Context(), name); err == nil || errors.Is(err, store.ErrNotFound) {
			t.Errorf("get of %.40q: found %v, expected that the name is refused", name, err)
		}
		if err := s.Delete(t.Context(), name); err == nil {
			t.Errorf("delete of %.40q: expected an error", name)
		}
	}
	for _, prefix := range []string{"../", "/", "a/../", "A"} {
		if _, err := s.List(t.Context(), prefix); err == nil {
			t.Errorf("list of %q: expected an error", prefix)
		}
	}
	if names, err := s.List(t.Context(), ""); err != nil || len(names) > 0 {
		t.Errorf("found %q, %v after refused puts, expected nothing", names, err)
	}
}

func concurrent(t *testing.T, s store.Store) {
	const writers = 8
	data := bytes.Repeat([]byte("same content "), 10_000)
	var all sync.WaitGroup
	errs := make([]error, 2*writers)
	for i := range writers {
		all.Go(func() { errs[2*i] = s.Put(t.Context(), "parts/one", data) })
		all.Go(func() { errs[2*i+1] = wholeOrMissing(t.Context(), s, "parts/one", data) })
	}
	all.Wait()
	if err := errors.Join(errs...); err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(get(t, s, "parts/one"), data) {
		t.Error("found other bytes than every writer put")
	}
	if names, err := s.List(t.Context(), ""); err != nil || !slices.Equal(names, []string{"parts/one"}) {
		t.Errorf("found %q, %v, expected one name", names, err)
	}
}

func wholeOrMissing(ctx context.Context, s store.Store, name string, data []byte) error {
	b, err := s.Get(ctx, name)
	if errors.Is(err, store.ErrNotFound) {
		return nil
	}
	if err == nil && !bytes.Equal(b, data) {
		return fmt.Errorf("a reader found %d bytes of %d", len(b), len(data))
	}
	return err
}

func ended(t *testing.T, s store.Store) {
	put(t, s, "a", []byte("x"))
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	_, getErr := s.Get(ctx, "a")
	_, listErr := s.List(ctx, "")
	for call, err := range map[string]error{
		"put": s.Put(ctx, "b", nil), "get": getErr, "list": listErr, "delete": s.Delete(ctx, "a"),
	} {
		if !errors.Is(err, context.Canceled) {
			t.Errorf("%s: found %v, expected context.Canceled", call, err)
		}
	}
	if got := get(t, s, "a"); string(got) != "x" {
		t.Errorf("found %q after a delete that was stopped", got)
	}
}

func owned(t *testing.T, s store.Store) {
	data := []byte("mine")
	put(t, s, "a", data)
	data[0] = 'X'
	got := get(t, s, "a")
	got[1] = 'X'
	if again := get(t, s, "a"); string(again) != "mine" {
		t.Errorf("found %q, expected that neither slice is the store's", again)
	}
}
