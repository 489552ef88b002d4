package store

import (
	"context"
	"errors"
	"fmt"
	"strings"
)

// ErrNotFound is what Get of a name that is not there wraps.
var ErrNotFound = errors.New("not found")

// MaxName is the longest name in bytes.
const MaxName = 255

// Store keeps data under names. All methods may be called at the same time
// from any number of goroutines and processes.
type Store interface {
	// Put stores data under name, durably and as a whole. A name has one
	// content: where it is taken already, Put keeps what stands there and
	// returns nil.
	Put(ctx context.Context, name string, data []byte) error

	// Get returns what stands under name; errors.Is(err, ErrNotFound) where
	// nothing does. The caller owns the slice.
	Get(ctx context.Context, name string) ([]byte, error)

	// List returns the names that begin with prefix, sorted; an empty prefix
	// lists everything.
	List(ctx context.Context, prefix string) ([]string, error)

	// Delete removes name durably. A name that is not there is no error.
	Delete(ctx context.Context, name string) error
}

// Part is the name of a solved tile's part.
func Part(tile string) string { return "parts/" + tile + ".parquet" }

// Aside is the name of the record of a tile that was set aside.
func Aside(tile string) string { return "aside/" + tile + ".json" }

// Refused is the name of the record of a message that was refused.
func Refused(id string) string { return "refused/" + id + ".json" }

// Tile gives the tile of a Part's or an Aside's name.
func Tile(name string) (tile string, ok bool) {
	if t, found := strings.CutPrefix(name, "parts/"); found {
		return strings.CutSuffix(t, ".parquet")
	}
	if t, found := strings.CutPrefix(name, "aside/"); found {
		return strings.CutSuffix(t, ".json")
	}
	return "", false
}

// CheckName reports whether name may be stored.
func CheckName(name string) error {
	if name == "" || len(name) > MaxName {
		return fmt.Errorf("store: found a name of %d bytes, expected 1 to %d", len(name), MaxName)
	}
	for _, piece := range strings.Split(name, "/") {
		if piece == "" || piece[0] == '.' {
			return fmt.Errorf("store: name %q: found an empty piece or one that begins with a dot", name)
		}
	}
	return checkBytes(name)
}

// checkPrefix reports whether names can begin with prefix.
func checkPrefix(prefix string) error {
	if prefix == "" {
		return nil
	}
	return CheckName(strings.TrimSuffix(prefix, "/"))
}

func checkBytes(name string) error {
	for i := range len(name) {
		c := name[i]
		if c >= 'a' && c <= 'z' || c >= '0' && c <= '9' || strings.IndexByte("./_-", c) >= 0 {
			continue
		}
		return fmt.Errorf("store: name %q: found %q, expected lower-case letters, digits and . / _ -", name, c)
	}
	return nil
}
