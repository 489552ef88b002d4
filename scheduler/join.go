package scheduler

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"io/fs"
	"os"
	"time"

	"betaloom/scheduler/collate"
	"betaloom/schema/store"
)

// joiner has the parts joined, unless the tables are those of the parts
// already.
type joiner struct {
	folder  *folder
	tiles   *tiles
	collate func(ctx context.Context, in collate.Input) (collate.Summary, error)
	hook    func(string)
	version string
	begins  func() // hears that tables are being written
}

func (j *joiner) join(ctx context.Context, out *Outcome, partial bool) error {
	h, err := j.tiles.have(ctx)
	if err != nil {
		return err
	}
	if missing := j.tiles.missing(h); len(missing) > 0 && !partial {
		return &collate.MissingError{Missing: len(missing), Tiles: len(j.tiles.names), First: j.tiles.names[missing[0]]}
	}
	if out.Aside, err = j.tiles.aside(ctx, h); err != nil {
		return err
	}
	if err := j.count(ctx, len(out.Aside)); err != nil {
		return err
	}
	from := j.from(h, out.Aside)
	if j.current(from) {
		out.UpToDate, out.Summary = true, j.folder.record.Result
		return nil
	}
	return j.write(ctx, out, from, partial)
}

func (j *joiner) count(ctx context.Context, aside int) error {
	refused, err := j.folder.store.List(ctx, "refused/")
	j.folder.record.Aside, j.folder.record.Refused = aside, len(refused)
	return err
}

func (j *joiner) write(ctx context.Context, out *Outcome, from string, partial bool) error {
	r := j.folder.record
	r.Tables, r.Result = nil, nil
	if err := j.folder.save(); err != nil { // from here on the tables are of no one
		return err
	}
	j.begins()
	begun := time.Now()
	summary, err := j.collate(ctx, collate.Input{
		Grid: j.tiles.grid, Store: hooked{Store: j.folder.store, hook: j.hook}, Dir: j.folder.dir, Partial: partial,
	})
	if err != nil {
		return err
	}
	r.CollateSeconds = time.Since(begun).Seconds()
	r.Result, out.Summary = &summary, &summary
	r.Tables = &Tables{From: from, Bytes: j.sizes(), Partial: partial}
	return j.folder.save()
}

// from is the hash of all that decides the tables: the tiles, which of them
// have a part, why the others were set aside, and the program.
func (j *joiner) from(h have, aside []store.SetAside) string {
	hash := sha256.New()
	e := json.NewEncoder(hash) // writing to a hash does not fail
	e.Encode(j.version)
	for _, name := range j.tiles.names {
		e.Encode([2]any{name, h.parts[name]})
	}
	e.Encode(aside)
	return hex.EncodeToString(hash.Sum(nil))
}

// current reports whether the tables in the folder are those of from.
func (j *joiner) current(from string) bool {
	t := j.folder.record.Tables
	if t == nil || t.From != from || j.folder.record.Result == nil || t.Bytes[collate.ModesFile] == 0 || t.Bytes[collate.PointsFile] == 0 {
		return false
	}
	now := j.sizes()
	for name, size := range t.Bytes {
		if now[name] != size {
			return false
		}
	}
	return true
}

func (j *joiner) sizes() map[string]int64 {
	sizes := make(map[string]int64)
	for _, name := range []string{collate.PointsFile, collate.ModesFile, collate.SurfacesFile} {
		if st, err := os.Stat(j.folder.path(name)); err == nil {
			sizes[name] = st.Size()
		}
	}
	return sizes
}

// hooked tells a hook of each part that is read.
type hooked struct {
	store.Store
	hook func(string)
}

func (s hooked) Get(ctx context.Context, name string) ([]byte, error) {
	s.hook(PointCollating)
	return s.Store.Get(ctx, name)
}

func exists(path string) bool {
	_, err := os.Stat(path)
	return !errors.Is(err, fs.ErrNotExist)
}

// CollateOptions say which folder's parts are joined.
type CollateOptions struct {
	Dir     string
	Partial bool   // although tiles are missing
	Version string // as Options.Version

	Collate func(ctx context.Context, in collate.Input) (collate.Summary, error) // nil: collate.Run
}

// Collate joins the parts of a run folder into its tables, unless they are
// joined already. Missing tiles are a *collate.MissingError, damaged parts a
// *collate.CorruptError (Run solves both); a folder in which another process
// works is an error that wraps store.ErrLocked.
func Collate(ctx context.Context, o CollateOptions) (out Outcome, err error) {
	if o.Collate == nil {
		o.Collate = collate.Run
	}
	f, g, err := reopen(o.Dir)
	if err != nil {
		return Outcome{}, err
	}
	defer func() { err = errors.Join(err, f.release()) }()
	t, err := newTiles(ctx, g, f.store)
	if err != nil {
		return Outcome{}, err
	}
	j := joiner{folder: f, tiles: t, collate: o.Collate, hook: func(string) {}, version: o.Version, begins: func() {}}
	out.Record = f.record
	return out, j.join(ctx, &out, o.Partial)
}
