package scheduler_test

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"betaloom/scheduler"
	"betaloom/schema"
	"betaloom/schema/part/parttest"
	"betaloom/schema/queue"
	"betaloom/schema/store"
	"betaloom/schema/sweep"
)

// deadline bounds what takes moments on any machine.
const deadline = 2 * time.Minute

// points is the size of question: its blocks are 16 points wide along the two
// longer axes, so that it has nine tiles.
const points = 33 * 33 * 5

func question() *sweep.Sweep { return box(33) }

func box(wavelengths int) *sweep.Sweep {
	return &sweep.Sweep{
		Name: "film", Physics: parttest.Physics(), Axes: parttest.Axes(wavelengths, 33, 5),
		Source: []byte(fmt.Sprintf("sweep: film # %d wavelengths\n", wavelengths)),
	}
}

// answers is a worker whose answers are those of parttest.
type answers struct {
	solved  atomic.Int64
	refuse  func(t *schema.Tile) string             // a reason to set the tile aside
	hook    func(point string)                      // as the real worker's
	failing func(t *schema.Tile, attempt int) error // ends the worker
	mute    func(t *schema.Tile) bool               // takes the tile and never answers
}

func (a *answers) run(ctx context.Context, q queue.Taker, s store.Store, slots int) error {
	errs := make([]error, slots)
	var all sync.WaitGroup
	for i := range slots {
		all.Go(func() { errs[i] = a.slot(ctx, q, s) })
	}
	all.Wait()
	return errors.Join(errs...)
}

func (a *answers) slot(ctx context.Context, q queue.Taker, s store.Store) error {
	for {
		d, err := q.Take(ctx)
		if ctx.Err() != nil {
			return nil
		}
		if err != nil {
			return err
		}
		if err := a.answer(ctx, d, s); err != nil {
			return err
		}
	}
}

func (a *answers) answer(ctx context.Context, d queue.Delivery, s store.Store) error {
	job, err := d.Job()
	if err != nil {
		return err
	}
	if a.mute != nil && a.mute(&job.Tile) {
		return nil
	}
	if a.failing != nil {
		if err := a.failing(&job.Tile, d.Attempt()); err != nil {
			return err
		}
	}
	reply := context.WithoutCancel(ctx)
	if a.refuse != nil {
		if reason := a.refuse(&job.Tile); reason != "" {
			b, err := json.Marshal(store.SetAside{Tile: job.Name, Reason: reason, Attempts: 1})
			return errors.Join(err, s.Put(reply, store.Aside(job.Name), b), d.Refuse(reply, reason))
		}
	}
	b, err := parttest.Part(&job.Tile)
	if err != nil {
		return err
	}
	a.pass("solved")
	if ctx.Err() != nil {
		return d.GiveBack(reply)
	}
	if err := s.Put(reply, store.Part(job.Name), b); err != nil {
		return err
	}
	a.solved.Add(1)
	a.pass("part-written")
	return d.Confirm(reply)
}

func (a *answers) pass(point string) {
	if a.hook != nil {
		a.hook(point)
	}
}

// options run a sweep with two slots of a worker. The report is a line.
func options(dir string, sw *sweep.Sweep, a *answers) scheduler.Options {
	return scheduler.Options{
		Sweep: sw, File: "film.yaml", Dir: dir, Workers: 2, Version: "test", Worker: a.run,
		Report: func(_ context.Context, dir string) error {
			return os.WriteFile(filepath.Join(dir, "report.html"), []byte("<p>done"), 0o644)
		},
	}
}

func within(t *testing.T) (context.Context, context.CancelFunc) {
	t.Helper()
	ctx, cancel := context.WithTimeout(t.Context(), deadline)
	t.Cleanup(cancel)
	return ctx, cancel
}

// finish runs to the end.
func finish(t *testing.T, o scheduler.Options) scheduler.Outcome {
	t.Helper()
	ctx, _ := within(t)
	out, err := scheduler.Run(ctx, o)
	if err != nil {
		t.Fatal(err)
	}
	if out.Interrupted || out.Summary == nil || out.Record == nil {
		t.Fatalf("found %+v, expected a run at its end", out)
	}
	return out
}

// files lists every file under dir with its bytes.
func files(t *testing.T, dir string) map[string]string {
	t.Helper()
	all := make(map[string]string)
	err := filepath.WalkDir(dir, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		name, err := filepath.Rel(dir, path)
		if err != nil {
			return err
		}
		b, err := os.ReadFile(path)
		all[name] = string(b)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return all
}

// whole checks a folder after a run: what must be there is, nothing else is,
// and a part stands for each tile.
func whole(t *testing.T, dir string, parts, aside int) {
	t.Helper()
	counts := make(map[string]int)
	for name := range files(t, dir) {
		if i := strings.IndexByte(name, '/'); i >= 0 {
			name = name[:i+1]
		}
		counts[name]++
	}
	want := map[string]int{
		".lock": 1, "sweep.yaml": 1, "grid.json": 1, "run.json": 1, "points.parquet": 1, "modes.parquet": 1, "surfaces.arrow": 1,
		"report.html": 1, "parts/": parts,
	}
	if aside > 0 {
		want["aside/"] = aside
	}
	if fmt.Sprint(counts) != fmt.Sprint(want) {
		t.Errorf("found the files %v, expected %v", counts, want)
	}
}

// tables gives what must not depend on how a run went.
func tables(t *testing.T, dir string) map[string]string {
	t.Helper()
	all := files(t, dir)
	for name, content := range all {
		switch {
		case name == "points.parquet", name == "modes.parquet", name == "surfaces.arrow", strings.HasPrefix(name, "parts/"):
			if content == "" {
				t.Errorf("%s: found an empty file", name)
			}
		default:
			delete(all, name)
		}
	}
	return all
}

func same(t *testing.T, got, want map[string]string) {
	t.Helper()
	if len(want) < 4 || len(got) != len(want) {
		t.Errorf("found %d files, expected %d", len(got), len(want))
	}
	for name := range want {
		if got[name] != want[name] {
			t.Errorf("%s: found other bytes than in an undisturbed run", name)
		}
	}
}
