package scheduler_test

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"testing"
	"time"

	"github.com/google/uuid"
	"github.com/nats-io/nats-server/v2/server"

	"betaloom/scheduler"
	"betaloom/scheduler/collate"
	"betaloom/schema"
	"betaloom/schema/queue"
	"betaloom/schema/store"
)

func TestRun(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "runs", "film") // made with its parents
	a := &answers{}
	out := finish(t, options(dir, question(), a))
	whole(t, dir, 9, 0)
	if n := a.solved.Load(); n != 9 {
		t.Errorf("solved %d tiles, expected 9", n)
	}
	if out.UpToDate || len(out.Aside) > 0 || out.Summary.Points["solved"] == 0 || out.Summary.OverAccuracy == 0 {
		t.Errorf("found %+v with %+v, expected solved points, some less accurate", out, out.Summary)
	}
	r, err := scheduler.ReadRecord(dir)
	if err != nil {
		t.Fatal(err)
	}
	id, err := uuid.Parse(r.ID)
	if err != nil || id.Version() != 7 {
		t.Errorf("found the id %s, %v, expected a UUIDv7", r.ID, err)
	}
	if r.State != scheduler.Complete || r.Points != points || r.Tiles != 9 || r.Starts != 1 || r.Workers != 2 || r.Program != "test" {
		t.Errorf("found %+v", r)
	}
	if r.Result == nil || r.Tables == nil || r.Ended.Before(r.Started) || r.SolveSeconds <= 0 || r.CollateSeconds <= 0 {
		t.Errorf("found %+v, expected counts, tables and times", r)
	}
	if b := files(t, dir)["sweep.yaml"]; b != "sweep: film # 33 wavelengths\n" {
		t.Errorf("found %q in sweep.yaml, expected the source", b)
	}
	g, err := scheduler.ReadGrid(dir)
	if err != nil || g.Points() != points {
		t.Errorf("found %v, %v, expected the grid again", g, err)
	}
}

func TestRunAgain(t *testing.T) {
	dir := t.TempDir()
	first := finish(t, options(dir, question(), &answers{}))
	before := tables(t, dir)
	stat, err := os.Stat(filepath.Join(dir, "modes.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	untouched := func(want bool) {
		t.Helper()
		now, err := os.Stat(filepath.Join(dir, "modes.parquet"))
		if err != nil || os.SameFile(stat, now) != want {
			t.Errorf("found the same file %v, %v, expected %v", os.SameFile(stat, now), err, want)
		}
		stat = now
	}
	again := func(version string, wantUpToDate bool) scheduler.Outcome {
		t.Helper()
		a := &answers{}
		o := options(dir, question(), a)
		o.Version = version
		out := finish(t, o)
		if n := a.solved.Load(); n != 0 || out.UpToDate != wantUpToDate {
			t.Errorf("solved %d tiles, up to date %v, expected none and %v", n, out.UpToDate, wantUpToDate)
		}
		same(t, tables(t, dir), before)
		return out
	}
	out := again("test", true)
	untouched(true)
	if out.Record.ID != first.Record.ID || out.Record.Starts != 2 || fmt.Sprint(out.Summary) != fmt.Sprint(first.Summary) {
		t.Errorf("found %+v with %+v, expected the same run", out.Record, out.Summary)
	}
	for _, name := range []string{"modes.parquet", "points.parquet", "surfaces.arrow"} {
		if err := os.Remove(filepath.Join(dir, name)); err != nil {
			t.Fatal(err)
		}
		again("test", false)
	}
	if err := os.Truncate(filepath.Join(dir, "points.parquet"), 100); err != nil {
		t.Fatal(err)
	}
	again("test", false)
	again("newer", false) // a newer program may write other tables
	if err := os.Remove(filepath.Join(dir, "report.html")); err != nil {
		t.Fatal(err)
	}
	again("newer", false)
	whole(t, dir, 9, 0)
}

func TestWorkersAgree(t *testing.T) {
	var one map[string]string
	for _, n := range []int{1, 4} {
		dir := t.TempDir()
		o := options(dir, question(), &answers{})
		o.Workers = n
		finish(t, o)
		if one == nil {
			one = tables(t, dir)
			continue
		}
		same(t, tables(t, dir), one)
	}
}

// undisturbed gives the tables of a run that nothing happened to.
func undisturbed(t *testing.T) map[string]string {
	t.Helper()
	dir := t.TempDir()
	finish(t, options(dir, question(), &answers{}))
	return tables(t, dir)
}

// A run that is interrupted at any of its points says so, can be started
// again, and ends in the same bytes.
func TestInterrupted(t *testing.T) {
	want := undisturbed(t)
	for _, point := range []string{"published-some", "solved", "before-rename", "part-written", "collating"} {
		for _, nth := range []int{1, 5} {
			t.Run(fmt.Sprintf("%s %d", point, nth), func(t *testing.T) {
				dir := t.TempDir()
				ctx, cancel := within(t)
				var mu sync.Mutex
				passed := 0
				hook := func(p string) {
					mu.Lock()
					defer mu.Unlock()
					if p == point {
						passed++
					}
					if passed == nth {
						cancel()
					}
				}
				o := options(dir, question(), &answers{hook: hook})
				o.Hook = hook
				out, err := scheduler.Run(ctx, o)
				if err != nil || !out.Interrupted || passed < nth {
					t.Fatalf("found %+v, %v after %d times, expected an interruption", out, err, passed)
				}
				r, err := scheduler.ReadRecord(dir)
				if err != nil || r.State != scheduler.Interrupted {
					t.Fatalf("found %+v, %v, expected an interrupted run", r, err)
				}
				left := 9 - int64(len(partsOf(t, dir)))
				again := &answers{}
				finish(t, options(dir, question(), again))
				if n := again.solved.Load(); n != left {
					t.Errorf("solved %d tiles again, expected the %d that were missing", n, left)
				}
				same(t, tables(t, dir), want)
				whole(t, dir, 9, 0)
			})
		}
	}
}

func partsOf(t *testing.T, dir string) (names []string) {
	t.Helper()
	for name := range files(t, dir) {
		if strings.HasPrefix(name, "parts/") && !strings.Contains(name, ".writing-") {
			names = append(names, name)
		}
	}
	slices.Sort(names)
	return names
}

// What a killed process leaves is cleared away: its queue, its progress, the
// file it was writing, the tables it had not finished.
func TestAfterKill(t *testing.T) {
	want := undisturbed(t)
	dir := t.TempDir()
	finish(t, options(dir, question(), &answers{}))
	parts := partsOf(t, dir)
	for _, gone := range append(parts[:3], "modes.parquet") {
		if err := os.Remove(filepath.Join(dir, gone)); err != nil {
			t.Fatal(err)
		}
	}
	for name, content := range map[string]string{
		"queue/jetstream/junk": "not a stream", "progress.json": "{", ".writing-123": "half", "parts/.writing-4": "half a part",
		"modes.parquet.tmp": "half a table",
	} {
		path := filepath.Join(dir, name)
		if err := errors.Join(os.MkdirAll(filepath.Dir(path), 0o755), os.WriteFile(path, []byte(content), 0o644)); err != nil {
			t.Fatal(err)
		}
	}
	a := &answers{}
	finish(t, options(dir, question(), a))
	if n := a.solved.Load(); n != 3 {
		t.Errorf("solved %d tiles, expected 3", n)
	}
	same(t, tables(t, dir), want)
	whole(t, dir, 9, 0)
}

// A damaged part is found, solved anew, and the tables are the same.
func TestDamagedPart(t *testing.T) {
	want := undisturbed(t)
	for name, damage := range map[string]func(b []byte) []byte{
		"cut off":    func(b []byte) []byte { return b[:len(b)/2] },
		"empty":      func(b []byte) []byte { return nil },
		"no part":    func(b []byte) []byte { return []byte("hello") },
		"wrong tile": nil,
	} {
		t.Run(name, func(t *testing.T) {
			dir := t.TempDir()
			finish(t, options(dir, question(), &answers{}))
			parts := partsOf(t, dir)
			for i, p := range parts[:2] {
				b := []byte(files(t, dir)[parts[i+2]])
				if damage != nil {
					b = damage(b)
				}
				if err := os.WriteFile(filepath.Join(dir, p), b, 0o644); err != nil {
					t.Fatal(err)
				}
			}
			if err := os.Remove(filepath.Join(dir, "points.parquet")); err != nil {
				t.Fatal(err)
			}
			a := &answers{}
			finish(t, options(dir, question(), a))
			if n := a.solved.Load(); n != 2 {
				t.Errorf("solved %d tiles, expected the two damaged ones", n)
			}
			same(t, tables(t, dir), want)
		})
	}
}

// A box that grows keeps its inner tiles; the parts of one that shrinks stay.
func TestBoxChanges(t *testing.T) {
	dir := t.TempDir()
	finish(t, options(dir, question(), &answers{}))
	small := question()
	small.Axes[0].Values = small.Axes[0].Values[:32] // two blocks of three
	a := &answers{}
	out := finish(t, options(dir, small, a))
	if n := a.solved.Load(); n != 0 || out.Record.Points != 32*33*5 || out.UpToDate {
		t.Errorf("solved %d tiles of %d points, expected none and new tables", n, out.Record.Points)
	}
	whole(t, dir, 9, 0)
	finish(t, options(dir, question(), a))
	if n := a.solved.Load(); n != 0 {
		t.Errorf("solved %d tiles when the box came back, expected none", n)
	}
	same(t, tables(t, dir), undisturbed(t))
}

func TestForeignFolder(t *testing.T) {
	cases := map[string]struct {
		change func(r map[string]any)
		says   string
	}{
		"another sweep":    {func(r map[string]any) { r["sweep"] = "rib" }, `found a run of sweep "rib", expected one of "film"`},
		"newer folder":     {func(r map[string]any) { r["format"] = 2 }, "found format 2, expected 1"},
		"newer physics":    {func(r map[string]any) { r["physics_format"] = 99 }, "found parts of format 99"},
		"no record at all": {nil, "expected a run of this program"},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			dir := t.TempDir()
			finish(t, options(dir, question(), &answers{}))
			record := []byte("not a record")
			if c.change != nil {
				var r map[string]any
				if err := json.Unmarshal([]byte(files(t, dir)["run.json"]), &r); err != nil {
					t.Fatal(err)
				}
				c.change(r)
				var err error
				if record, err = json.Marshal(r); err != nil {
					t.Fatal(err)
				}
			}
			if err := os.WriteFile(filepath.Join(dir, "run.json"), record, 0o644); err != nil {
				t.Fatal(err)
			}
			before := files(t, dir)
			_, err := scheduler.Run(t.Context(), options(dir, box(20), &answers{}))
			var foreign *scheduler.FolderError
			if !errors.As(err, &foreign) || !strings.Contains(err.Error(), c.says) || !strings.Contains(err.Error(), "another folder") {
				t.Errorf("found %v, expected a refusal that says %q and what to do", err, c.says)
			}
			if fmt.Sprint(files(t, dir)) != fmt.Sprint(before) {
				t.Error("found a folder that was changed all the same")
			}
		})
	}
}

// A folder that is no run's is left alone, whatever of a run's names it holds.
func TestFolderOfSomethingElse(t *testing.T) {
	for _, name := range []string{"queue/mine.txt", "grid.json", "modes.parquet", "report.html"} {
		t.Run(name, func(t *testing.T) {
			dir := t.TempDir()
			path := filepath.Join(dir, name)
			if err := errors.Join(os.MkdirAll(filepath.Dir(path), 0o755), os.WriteFile(path, []byte("mine"), 0o644)); err != nil {
				t.Fatal(err)
			}
			before := files(t, dir)
			_, err := scheduler.Run(t.Context(), options(dir, question(), &answers{}))
			var foreign *scheduler.FolderError
			if !errors.As(err, &foreign) || !strings.Contains(err.Error(), "and no run.json") {
				t.Errorf("found %v, expected a refusal", err)
			}
			after := files(t, dir)
			delete(after, ".lock")
			if fmt.Sprint(after) != fmt.Sprint(before) {
				t.Error("found a folder that was changed all the same")
			}
		})
	}
}

// A process that ends between the tables and the report leaves the report of
// the tables before: it is written anew.
func TestReportOfOldTables(t *testing.T) {
	dir := t.TempDir()
	finish(t, options(dir, question(), &answers{}))
	small := question()
	small.Axes[0].Values = small.Axes[0].Values[:32]
	o := options(dir, small, &answers{})
	ctx, cancel := within(t)
	o.Report = func(context.Context, string) error {
		cancel()
		return ctx.Err()
	}
	if out, err := scheduler.Run(ctx, o); err != nil || !out.Interrupted {
		t.Fatalf("found %+v, %v, expected an interruption at the report", out, err)
	}
	written := 0
	o = options(dir, small, &answers{})
	o.Report = func(context.Context, string) error {
		written++
		return nil
	}
	for range 2 {
		finish(t, o)
		if written != 1 {
			t.Errorf("found the report written %d times, expected once", written)
		}
	}
}

// Two runs in one folder: the second is refused, the first goes on.
func TestOneRunAtATime(t *testing.T) {
	dir := t.TempDir()
	var once sync.Once
	var second, status error
	var seen *scheduler.Status
	a := &answers{}
	a.hook = func(string) {
		once.Do(func() {
			_, second = scheduler.Run(t.Context(), options(dir, question(), &answers{}))
			seen, status = scheduler.ReadStatus(t.Context(), dir)
		})
	}
	finish(t, options(dir, question(), a))
	if !errors.Is(second, store.ErrLocked) {
		t.Errorf("found %v, expected that the folder is locked", second)
	}
	if status != nil || !seen.Running || seen.Record.State != scheduler.Running {
		t.Errorf("found %+v, %v, expected the status of a run that is under way", seen, status)
	}
	whole(t, dir, 9, 0)
}

// firstBlock picks the tile with the lowest values.
func firstBlock(t *schema.Tile) bool {
	axes := question().Axes
	return t.Axes[0].Values[0] == axes[0].Values[0] && t.Axes[1].Values[0] == axes[1].Values[0]
}

// A tile that is set aside leaves the others alone, is not tried again on its
// own, and is when that is asked for.
func TestSetAside(t *testing.T) {
	dir := t.TempDir()
	picky := &answers{refuse: func(t *schema.Tile) string {
		if firstBlock(t) {
			return "the solver panicked: index out of range"
		}
		return ""
	}}
	for _, solved := range []int64{8, 8} {
		out := finish(t, options(dir, question(), picky))
		if n := picky.solved.Load(); n != solved {
			t.Errorf("solved %d tiles, expected %d", n, solved)
		}
		if len(out.Aside) != 1 || out.Aside[0].Reason != "the solver panicked: index out of range" || out.Record.State != scheduler.Incomplete {
			t.Errorf("found %+v in state %s, expected one tile set aside", out.Aside, out.Record.State)
		}
		if out.Record.Aside != 1 || out.Summary.AsideTiles != 1 || out.Summary.Points["failed"] < 16*16*4 {
			t.Errorf("found %+v, expected the tile's points to have failed", out.Summary)
		}
	}
	whole(t, dir, 8, 1)
	st, err := scheduler.ReadStatus(t.Context(), dir)
	if err != nil || st.Running || len(st.Aside) != 1 || st.Progress.TilesDone != 9 {
		t.Errorf("found %+v, %v, expected one tile set aside", st, err)
	}
	o := options(dir, question(), &answers{})
	o.Retry = true
	if out := finish(t, o); len(out.Aside) != 0 || out.Record.State != scheduler.Complete || out.Record.Aside != 0 {
		t.Errorf("found %+v, expected a complete run", out.Record)
	}
	same(t, tables(t, dir), undisturbed(t))
}

// A tile that ends every worker that takes it is set aside by the run.
func TestDeadlyTile(t *testing.T) {
	dir := t.TempDir()
	a := &answers{mute: firstBlock}
	o := options(dir, question(), a)
	o.Queue = queue.Options{AckWait: 100 * time.Millisecond, MaxDeliver: 2}
	out := finish(t, o)
	if len(out.Aside) != 1 || !strings.Contains(out.Aside[0].Reason, "no worker answered in 2 attempts") || out.Record.State != scheduler.Incomplete {
		t.Errorf("found %+v in state %s, expected the tile set aside with its reason", out.Aside, out.Record.State)
	}
	whole(t, dir, 8, 1)
}

// A worker that fails breaks the run, which says why and can go on later.
func TestWorkerFails(t *testing.T) {
	dir := t.TempDir()
	full := errors.New("no space left on device")
	var mu sync.Mutex
	taken := 0
	a := &answers{failing: func(*schema.Tile, int) error {
		mu.Lock()
		defer mu.Unlock()
		taken++
		if taken > 3 {
			return full
		}
		return nil
	}}
	ctx, _ := within(t)
	_, err := scheduler.Run(ctx, options(dir, question(), a))
	if !errors.Is(err, full) {
		t.Fatalf("found %v, expected the worker's error", err)
	}
	r, err := scheduler.ReadRecord(dir)
	if err != nil || r.State != scheduler.Broken || !strings.Contains(r.Error, full.Error()) {
		t.Errorf("found %+v, %v, expected a broken run with its reason", r, err)
	}
	finish(t, options(dir, question(), &answers{}))
	same(t, tables(t, dir), undisturbed(t))
	if r, err = scheduler.ReadRecord(dir); err != nil || r.State != scheduler.Complete || r.Error != "" {
		t.Errorf("found %+v, %v, expected a complete run", r, err)
	}
}

// What joining and reporting meet is told, and the run can go on.
func TestLaterPhasesFail(t *testing.T) {
	because := errors.New("out of luck")
	for name, spoil := range map[string]func(o *scheduler.Options){
		"collate": func(o *scheduler.Options) {
			o.Collate = func(context.Context, collate.Input) (collate.Summary, error) { return collate.Summary{}, because }
		},
		"report": func(o *scheduler.Options) { o.Report = func(context.Context, string) error { return because } },
	} {
		t.Run(name, func(t *testing.T) {
			dir := t.TempDir()
			o := options(dir, question(), &answers{})
			spoil(&o)
			ctx, _ := within(t)
			if _, err := scheduler.Run(ctx, o); !errors.Is(err, because) {
				t.Errorf("found %v, expected the error of the phase", err)
			}
			finish(t, options(dir, question(), &answers{}))
			whole(t, dir, 9, 0)
		})
	}
}

// Parts that stay damaged however often they are solved end the run.
func TestDamageStays(t *testing.T) {
	a := &answers{}
	o := options(t.TempDir(), question(), a)
	name, err := question0Name(t)
	if err != nil {
		t.Fatal(err)
	}
	o.Collate = func(context.Context, collate.Input) (collate.Summary, error) {
		return collate.Summary{}, &collate.CorruptError{Parts: []collate.Corrupt{{Tile: name, Reason: "bad memory"}}}
	}
	ctx, _ := within(t)
	_, err = scheduler.Run(ctx, o)
	var damaged *collate.CorruptError
	if !errors.As(err, &damaged) || a.solved.Load() != 9+3 {
		t.Errorf("found %v after %d tiles, expected the damage after three more attempts", err, a.solved.Load())
	}
}

func question0Name(t *testing.T) (string, error) {
	t.Helper()
	p, err := scheduler.NewPlan("film.yaml", question())
	if err != nil {
		return "", err
	}
	return p.Grid.Tile(0).Name()
}

// The same run over a server that is reached through the network.
func TestExternalQueue(t *testing.T) {
	srv, err := server.NewServer(&server.Options{
		Host: "127.0.0.1", Port: server.RANDOM_PORT, JetStream: true, StoreDir: t.TempDir(), NoSigs: true, NoLog: true,
	})
	if err != nil {
		t.Fatal(err)
	}
	srv.Start()
	defer func() { srv.Shutdown(); srv.WaitForShutdown() }()
	if !srv.ReadyForConnections(deadline) {
		t.Fatal("the server did not come up")
	}
	dir := t.TempDir()
	o := options(dir, question(), &answers{})
	o.URL = srv.ClientURL()
	out := finish(t, o)
	whole(t, dir, 9, 0)
	same(t, tables(t, dir), undisturbed(t))
	nc, err := queue.Connect(o.URL)
	if err != nil {
		t.Fatal(err)
	}
	defer nc.Close()
	if _, err := queue.Attach(t.Context(), nc, out.Record.ID); !errors.Is(err, queue.ErrGone) {
		t.Errorf("found %v, expected that the queue of a finished run is deleted", err)
	}
}

// Progress rises to the end and names every phase.
func TestProgress(t *testing.T) {
	dir := t.TempDir()
	var seen []scheduler.Progress
	o := options(dir, question(), &answers{})
	o.Progress = func(p scheduler.Progress) { seen = append(seen, p) }
	finish(t, o)
	var phases []scheduler.Phase
	for i, p := range seen {
		if p.Points != points || p.Tiles != 9 || p.TilesDone > 9 || p.PointsDone > p.Points || p.At.IsZero() {
			t.Errorf("found %+v", p)
		}
		if i > 0 && p.Phase == seen[i-1].Phase && p.TilesDone < seen[i-1].TilesDone {
			t.Errorf("found %d tiles after %d", p.TilesDone, seen[i-1].TilesDone)
		}
		if len(phases) == 0 || phases[len(phases)-1] != p.Phase {
			phases = append(phases, p.Phase)
		}
	}
	want := []scheduler.Phase{scheduler.Preparing, scheduler.Solving, scheduler.Collating, scheduler.Reporting}
	if !slices.Equal(phases, want) {
		t.Errorf("found the phases %q, expected %q", phases, want)
	}
}

func TestCollate(t *testing.T) {
	dir := t.TempDir()
	finish(t, options(dir, question(), &answers{}))
	want := tables(t, dir)
	o := scheduler.CollateOptions{Dir: dir, Version: "test"}
	if out, err := scheduler.Collate(t.Context(), o); err != nil || !out.UpToDate {
		t.Errorf("found %+v, %v, expected tables that are up to date", out, err)
	}
	if err := os.Remove(filepath.Join(dir, partsOf(t, dir)[0])); err != nil {
		t.Fatal(err)
	}
	var missing *collate.MissingError
	if _, err := scheduler.Collate(t.Context(), o); !errors.As(err, &missing) {
		t.Errorf("found %v, expected that a tile is missing", err)
	}
	o.Partial = true
	out, err := scheduler.Collate(t.Context(), o)
	if err != nil || !out.Summary.Partial || !out.Record.Tables.Partial {
		t.Errorf("found %+v, %v, expected partial tables", out.Summary, err)
	}
	o.Partial = false
	if _, err := scheduler.Collate(t.Context(), o); !errors.As(err, &missing) {
		t.Errorf("found %v, expected that partial tables are not taken for whole ones", err)
	}
	finish(t, options(dir, question(), &answers{}))
	same(t, tables(t, dir), want)
}

func TestStatus(t *testing.T) {
	if _, err := scheduler.ReadStatus(t.Context(), t.TempDir()); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("found %v of a folder without a run, expected that there is none", err)
	}
	dir := t.TempDir()
	finish(t, options(dir, question(), &answers{}))
	parts := partsOf(t, dir)
	for _, p := range parts[:4] {
		if err := os.Remove(filepath.Join(dir, p)); err != nil {
			t.Fatal(err)
		}
	}
	st, err := scheduler.ReadStatus(t.Context(), dir)
	if err != nil {
		t.Fatal(err)
	}
	if p := st.Progress; st.Running || p.Tiles != 9 || p.TilesDone != 5 || p.Points != points || p.PointsDone <= 0 || p.PointsDone >= points {
		t.Errorf("found %+v, expected 5 of 9 tiles", st)
	}
}

func TestBadOptions(t *testing.T) {
	good := options(t.TempDir(), question(), &answers{})
	for name, spoil := range map[string]func(o *scheduler.Options){
		"no sweep": func(o *scheduler.Options) { o.Sweep = nil }, "no folder": func(o *scheduler.Options) { o.Dir = "" },
		"no worker": func(o *scheduler.Options) { o.Worker = nil }, "workers": func(o *scheduler.Options) { o.Workers = -1 },
		"queue": func(o *scheduler.Options) { o.Queue.MaxDeliver = -1 },
	} {
		t.Run(name, func(t *testing.T) {
			o := good
			spoil(&o)
			if _, err := scheduler.Run(t.Context(), o); err == nil {
				t.Error("expected an error")
			}
		})
	}
}
