package scheduler

import (
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"time"

	"github.com/google/uuid"

	"betaloom/scheduler/collate"
	"betaloom/scheduler/grid"
	"betaloom/scheduler/report"
	"betaloom/schema"
	"betaloom/schema/store"
	"betaloom/schema/sweep"
)

// FolderError says that a folder is not this sweep's. Nothing in it was
// changed; the file of its lock may be new.
type FolderError struct {
	Dir, Found, Expected string
}

func (e *FolderError) Error() string {
	return fmt.Sprintf("folder %s: found %s, expected %s; give the run another folder, or remove this one", e.Dir, e.Found, e.Expected)
}

// folder is a run folder that this process has to itself.
type folder struct {
	dir     string
	store   *store.FolderStore
	record  *Record
	release func() error
}

// lockPatience is for a Status that looks at the lock in the same moment.
const lockPatience = 500 * time.Millisecond

// lockFolder takes the lock of a folder; one that another run holds is an
// error that wraps store.ErrLocked.
func lockFolder(dir string) (release func() error, err error) {
	deadline := time.Now().Add(lockPatience)
	for {
		release, err = store.Lock(filepath.Join(dir, fileLock))
		if err == nil {
			return release, nil
		}
		if !errors.Is(err, store.ErrLocked) || time.Now().After(deadline) {
			return nil, fmt.Errorf("run: another process works in %s: %w", dir, err)
		}
		time.Sleep(lockPatience / 20)
	}
}

// openFolder locks the folder, makes it the sweep's and removes what a killed
// process has left in it.
func openFolder(ctx context.Context, o *Options, plan *Plan) (*folder, error) {
	s, err := store.Folder(o.Dir)
	if err != nil {
		return nil, err
	}
	s.Hook = o.Hook
	release, err := lockFolder(o.Dir)
	if err != nil {
		return nil, err
	}
	f := &folder{dir: o.Dir, store: s, release: release}
	if err := f.begin(ctx, o, plan); err != nil {
		return nil, errors.Join(err, release())
	}
	return f, nil
}

func (f *folder) path(name string) string { return filepath.Join(f.dir, name) }

func (f *folder) begin(ctx context.Context, o *Options, plan *Plan) error {
	if err := f.adopt(o.Sweep); err != nil {
		return err
	}
	if err := f.clean(ctx); err != nil {
		return err
	}
	if err := f.outdate(o.Sweep); err != nil {
		return err
	}
	hash := sha256.Sum256(o.Sweep.Source)
	r := f.record
	r.SweepSHA256 = hex.EncodeToString(hash[:])
	r.Points, r.Tiles = plan.Grid.Points(), plan.Grid.Tiles()
	r.Program, r.Reasons, r.Workers = o.Version, plan.Reasons, o.Workers
	r.State, r.Error, r.Ended = Running, "", time.Time{}
	r.Starts++
	if err := f.save(); err != nil { // first: from here on the folder has an owner
		return err
	}
	if err := store.WriteFile(f.path(fileSweep), o.Sweep.Source); err != nil {
		return fmt.Errorf("run: %w", err)
	}
	return writeJSON(f.path(fileGrid), resolve(o.Sweep), "")
}

// outdate forgets tables that were made for another grid.
func (f *folder) outdate(sw *sweep.Sweep) error {
	if f.record.Tables == nil {
		return nil
	}
	before, err := os.ReadFile(f.path(fileGrid))
	if err != nil {
		return fmt.Errorf("run: %w", err)
	}
	now, err := encodeJSON(resolve(sw), "")
	if err != nil {
		return fmt.Errorf("run: %w", err)
	}
	if !bytes.Equal(before, now) {
		f.record.Tables, f.record.Result = nil, nil
	}
	return nil
}

// adopt reads the folder's record, or makes a new one where it has none.
func (f *folder) adopt(sw *sweep.Sweep) error {
	r, err := ReadRecord(f.dir)
	if errors.Is(err, fs.ErrNotExist) {
		if err := f.checkUnused(); err != nil {
			return err
		}
		id, err := uuid.NewV7()
		f.record = &Record{
			Format: FormatFolder, ID: id.String(), Sweep: sw.Name, Physics: schema.FormatPhysics, Started: time.Now().UTC(),
		}
		return err
	}
	if err != nil {
		return &FolderError{Dir: f.dir, Found: err.Error(), Expected: "a run of this program"}
	}
	if r.Sweep != sw.Name {
		return &FolderError{Dir: f.dir, Found: fmt.Sprintf("a run of sweep %q", r.Sweep), Expected: fmt.Sprintf("one of %q", sw.Name)}
	}
	if r.Physics != schema.FormatPhysics {
		return &FolderError{Dir: f.dir, Found: fmt.Sprintf("parts of format %d", r.Physics), Expected: fmt.Sprintf("format %d", schema.FormatPhysics)}
	}
	f.record = r
	return nil
}

// checkUnused refuses a folder without a record that holds what a run would
// remove or replace. It cannot be a run's: the record is written first.
func (f *folder) checkUnused() error {
	for _, name := range []string{folderQueue, fileProgress, fileGrid, collate.PointsFile, collate.ModesFile, collate.SurfacesFile, report.Name} {
		if exists(f.path(name)) {
			return &FolderError{Dir: f.dir, Found: name + " and no " + fileRun, Expected: "an empty folder or that of a run"}
		}
	}
	return nil
}

// clean removes the queue of a killed process, which the parts make
// superfluous, and the files that it was writing.
func (f *folder) clean(ctx context.Context) error {
	if err := f.removeTransient(); err != nil {
		return err
	}
	_, err := f.store.Clean(ctx, "")
	return err
}

func (f *folder) removeTransient() error {
	err := errors.Join(os.RemoveAll(f.path(folderQueue)), os.RemoveAll(f.path(fileProgress)))
	if err != nil {
		return fmt.Errorf("run: %w", err)
	}
	return nil
}

func (f *folder) save() error { return writeJSON(f.path(fileRun), f.record, "  ") }

// end writes how the run ended and releases the folder.
func (f *folder) end(state RunState, failure error) error {
	f.record.State, f.record.Ended = state, time.Now().UTC()
	if failure != nil {
		f.record.Error = failure.Error()
	}
	return errors.Join(f.save(), f.removeTransient(), f.release())
}

// reopen locks a folder that has a run and reads what it is.
func reopen(dir string) (*folder, *grid.Grid, error) {
	r, err := ReadRecord(dir)
	if err != nil {
		return nil, nil, err
	}
	g, err := ReadGrid(dir)
	if err != nil {
		return nil, nil, err
	}
	s, err := store.Folder(dir)
	if err != nil {
		return nil, nil, err
	}
	release, err := lockFolder(dir)
	if err != nil {
		return nil, nil, err
	}
	return &folder{dir: dir, store: s, record: r, release: release}, g, nil
}
