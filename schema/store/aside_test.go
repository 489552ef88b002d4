package store_test

import (
	"errors"
	"maps"
	"slices"
	"testing"

	"betaloom/schema/store"
)

func TestAside(t *testing.T) {
	s, want := open(t), store.SetAside{Tile: "ab", Reason: "layer core: too thin", Attempts: 3}
	if _, err := store.GetAside(t.Context(), s, "ab"); !errors.Is(err, store.ErrNotFound) {
		t.Errorf("found %v, expected that there is none", err)
	}
	if err := store.PutAside(t.Context(), s, want); err != nil {
		t.Fatal(err)
	}
	if got, err := store.GetAside(t.Context(), s, "ab"); got != want || err != nil {
		t.Errorf("found %+v, %v, expected %+v", got, err, want)
	}
	for name, content := range map[string]string{"empty": "", "half": "{", "list": "[]", "silent": "{}"} {
		if err := s.Put(t.Context(), store.Aside(name), []byte(content)); err != nil {
			t.Fatal(err)
		}
		if got, err := store.GetAside(t.Context(), s, name); got.Tile != name || got.Reason == "" || err != nil {
			t.Errorf("%s: found %+v, %v, expected a reason all the same", name, got, err)
		}
	}
}

func TestTiles(t *testing.T) {
	s := open(t)
	for _, name := range []string{store.Part("ab"), store.Part("cd"), store.Aside("ef"), "parts/other.txt"} {
		if err := s.Put(t.Context(), name, []byte("x")); err != nil {
			t.Fatal(err)
		}
	}
	for prefix, want := range map[string][]string{"parts/": {"ab", "cd"}, "aside/": {"ef"}, "refused/": nil} {
		got, err := store.Tiles(t.Context(), s, prefix)
		if err != nil || !slices.Equal(slices.Sorted(maps.Keys(got)), want) {
			t.Errorf("%s: found %v, %v, expected %v", prefix, got, err, want)
		}
	}
}
