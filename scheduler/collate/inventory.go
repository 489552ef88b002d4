package collate

import (
	"context"
	"errors"
	"fmt"

	"betaloom/schema"
	"betaloom/schema/store"

	"betaloom/scheduler/grid"
)

// PartialReason is the reason of a point that a partial collation finds no
// part for.
const PartialReason = "not solved yet: partial collation"

// MissingError says that tiles have neither a part nor a record of having been set
// aside.
type MissingError struct {
	Missing, Tiles int
	First          string // the name of the first one
}

func (e *MissingError) Error() string {
	return fmt.Sprintf("found %d of %d parts missing, the first of tile %s; expected them all unless the collation is partial",
		e.Missing, e.Tiles, e.First)
}

// Corrupt is a part that is not what it should be.
type Corrupt struct {
	Tile   string // the tile's name; its part is store.Part(Tile)
	Reason string
}

func (c *Corrupt) Error() string { return c.Reason }

// CorruptError lists every corrupt part of the grid, in order of tiles.
type CorruptError struct {
	Parts []Corrupt
}

func (e *CorruptError) Error() string {
	return fmt.Sprintf("found %d corrupt parts, the first of tile %s: %s", len(e.Parts), e.Parts[0].Tile, e.Parts[0].Reason)
}

// Tiles lists the tiles to solve again.
func (e *CorruptError) Tiles() []string {
	var names []string
	for _, p := range e.Parts {
		names = append(names, p.Tile)
	}
	return names
}

// inventory is what the store has of a grid's tiles.
type inventory struct {
	grid    *grid.Grid
	store   store.Store
	names   []string         // of the tiles, in order
	aside   map[int]string   // reasons of the tiles set aside
	missing map[int]struct{} // tiles without anything
}

func takeInventory(ctx context.Context, in Input) (*inventory, error) {
	parts, err := store.Tiles(ctx, in.Store, "parts/")
	if err != nil {
		return nil, err
	}
	asides, err := store.Tiles(ctx, in.Store, "aside/")
	if err != nil {
		return nil, err
	}
	inv := &inventory{grid: in.Grid, store: in.Store, aside: map[int]string{}, missing: map[int]struct{}{}}
	first := ""
	for i := range in.Grid.Tiles() {
		name, err := in.Grid.Tile(i).Name()
		if err != nil {
			return nil, err
		}
		inv.names = append(inv.names, name)
		if parts[name] {
			continue
		}
		if asides[name] {
			record, err := store.GetAside(ctx, in.Store, name)
			if err != nil {
				return nil, err
			}
			inv.aside[i] = record.Reason
			continue
		}
		if len(inv.missing) == 0 {
			first = name
		}
		inv.missing[i] = struct{}{}
	}
	if len(inv.missing) > 0 && !in.Partial {
		return nil, &MissingError{Missing: len(inv.missing), Tiles: len(inv.names), First: first}
	}
	return inv, nil
}

// why gives the reason of a tile without a part; ok is false for a solved one.
func (inv *inventory) why(tile int) (reason string, ok bool) {
	if reason, ok = inv.aside[tile]; ok {
		return reason, true
	}
	_, ok = inv.missing[tile]
	return PartialReason, ok
}

// get fetches the part of a tile. One that has gone since the inventory
// is missing.
func (inv *inventory) get(ctx context.Context, tile int) ([]byte, error) {
	b, err := inv.store.Get(ctx, store.Part(inv.names[tile]))
	if errors.Is(err, store.ErrNotFound) {
		return nil, &MissingError{Missing: 1, Tiles: len(inv.names), First: inv.names[tile]}
	}
	return b, err
}

func (inv *inventory) tile(i int) *schema.Tile { return inv.grid.Tile(i) }
