package store

import (
	"context"
	"encoding/json"
	"fmt"
)

// SetAside is the content of an Aside record, as JSON: a tile that could not
// be solved.
type SetAside struct {
	Tile     string `json:"tile"`
	Reason   string `json:"reason"`
	Attempts int    `json:"attempts"`
}

// PutAside records that a tile was set aside.
func PutAside(ctx context.Context, s Store, a SetAside) error {
	return PutJSON(ctx, s, Aside(a.Tile), a)
}

// GetAside reads the record of a tile that was set aside. One that cannot be
// read is no error: the tile was set aside either way, and the reason says so.
func GetAside(ctx context.Context, s Store, tile string) (SetAside, error) {
	b, err := s.Get(ctx, Aside(tile))
	if err != nil {
		return SetAside{}, err
	}
	var a SetAside
	if json.Unmarshal(b, &a) != nil || a.Reason == "" {
		a.Reason = "set aside; its record does not say why"
	}
	a.Tile = tile
	return a, nil
}

// PutJSON stores a record as indented JSON.
func PutJSON(ctx context.Context, s Store, name string, record any) error {
	b, err := json.MarshalIndent(record, "", "  ")
	if err != nil {
		return fmt.Errorf("store: %s: %w", name, err)
	}
	return s.Put(ctx, name, append(b, '\n'))
}

// Tiles gives the tiles that have a name under a prefix: "parts/" or "aside/".
func Tiles(ctx context.Context, s Store, prefix string) (map[string]bool, error) {
	names, err := s.List(ctx, prefix)
	if err != nil {
		return nil, err
	}
	tiles := make(map[string]bool, len(names))
	for _, name := range names {
		if tile, ok := Tile(name); ok {
			tiles[tile] = true
		}
	}
	return tiles, nil
}
