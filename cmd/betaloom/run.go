package main

import (
	"context"
	"encoding/json"
	"fmt"
	"io"
	"path/filepath"
	"runtime/debug"
	"slices"
	"strings"
	"sync"

	"betaloom/scheduler"
	"betaloom/scheduler/collate"
	"betaloom/schema/part"
	"betaloom/schema/queue"
	"betaloom/schema/store"
	"betaloom/worker"
)

type runCommand struct {
	Sweep   string `arg:"" help:"The sweep file."`
	Out     string `help:"The run's folder; runs/SWEEP-NAME where absent." placeholder:"DIR"`
	Workers int    `help:"Tiles solved at the same time; 0: one for each processor." default:"0"`
	Retry   bool   `help:"Try again what was set aside."`
	JSON    bool   `help:"Write the run's record as JSON."`
}

// Help shows the command by example.
func (runCommand) Help() string {
	return `Examples:

  betaloom run nitride-film.yaml
  betaloom run nitride-film.yaml --out /data/film --workers 8

Run it again after an interruption, or after the box has grown: only what is
missing is solved. Ctrl-C stops cleanly. The folder then holds modes.parquet
(a row a point and mode), points.parquet, surfaces.arrow and report.html.`
}

// Run solves a sweep in this process.
func (c *runCommand) Run(con *console) error {
	s, err := loadSweep(c.Sweep)
	if err != nil {
		return err
	}
	if c.Workers < 0 {
		return usage("run: found %d workers, expected 1 or more", c.Workers)
	}
	dir := c.Out
	if dir == "" {
		dir = filepath.Join("runs", s.Name)
	}
	m := newMeter(con.err)
	out, err := scheduler.Run(con.ctx, scheduler.Options{
		Sweep: s, File: c.Sweep, Dir: dir, Workers: workersOr(c.Workers), Retry: c.Retry, Version: version(),
		Worker: c.worker(con), Progress: m.show, Hook: con.hook,
	})
	m.finish()
	if err != nil {
		return err
	}
	return conclude(con, c.again(), dir, out, c.JSON)
}

// worker starts the workers of this process.
func (c *runCommand) worker(con *console) func(context.Context, queue.Taker, store.Store, int) error {
	return func(ctx context.Context, q queue.Taker, s store.Store, slots int) error {
		return worker.Run(ctx, worker.Options{Queue: q, Store: s, Slots: slots, Hook: con.hook, Events: trouble(con.err)})
	}
}

// again is the command that goes on with this run.
func (c *runCommand) again() string {
	again := "betaloom run " + c.Sweep
	if c.Out != "" {
		again += " --out " + c.Out
	}
	return again
}

// trouble writes what a person would want to know while it happens.
func trouble(w io.Writer) func(worker.Event) {
	var one sync.Mutex // slots speak at the same time
	return func(e worker.Event) {
		one.Lock()
		defer one.Unlock()
		switch e.Kind {
		case worker.TileRetried, worker.TileSetAside, worker.QueueTrouble, worker.MessageRefused:
			fmt.Fprintf(w, "%s: %.12s attempt %d: %v\n", e.Kind, e.Tile, e.Attempt, e.Err)
		}
	}
}

// conclude writes how a run ended and gives the error that sets the exit
// status.
func conclude(con *console, again, dir string, out scheduler.Outcome, asJSON bool) error {
	if out.Interrupted {
		return &endError{exitInterrupted, fmt.Sprintf("interrupted; what is solved is kept. To go on: %s", again)}
	}
	if asJSON {
		e := json.NewEncoder(con.out)
		e.SetIndent("", "  ")
		if err := e.Encode(out.Record); err != nil {
			return err
		}
	} else {
		writeOutcome(con.out, dir, out)
	}
	return shortfall(out)
}

func writeOutcome(w io.Writer, dir string, out scheduler.Outcome) {
	s := out.Summary
	if out.UpToDate {
		fmt.Fprintln(w, "nothing to solve: the tables are up to date")
	}
	fmt.Fprintf(w, "points    %s\n", pointsText(s))
	fmt.Fprintf(w, "modes     %d rows in %d families: %s\n", s.Rows, len(s.Families), familiesText(s))
	for _, name := range []string{"neff_err", "ng_err", "gvd_err_ps2_per_km", "beta3_err_ps3_per_km", "kappa_err"} {
		if e, ok := s.Errors[name]; ok {
			fmt.Fprintf(w, "bound     %-22s worst %.2g, median %.2g\n", name, e.Worst, e.Median)
		}
	}
	fmt.Fprintf(w, "folder    %s: modes.parquet, points.parquet, surfaces.arrow, report.html\n", dir)
}

func pointsText(s *collate.Summary) string {
	var texts []string
	for _, state := range []string{part.Solved, part.NoMode, part.Failed, part.Excluded} {
		if n := s.Points[state]; n > 0 {
			texts = append(texts, fmt.Sprintf("%d %s", n, state))
		}
	}
	return strings.Join(texts, ", ")
}

// mostFamilies bounds the list of families in a summary.
const mostFamilies = 12

func familiesText(s *collate.Summary) string {
	var names []string
	for name := range s.Families {
		names = append(names, name)
	}
	slices.Sort(names)
	if len(names) > mostFamilies {
		names = append(names[:mostFamilies], "...")
	}
	return strings.Join(names, " ")
}

// shortfall is nil where all was solved as asked.
func shortfall(out scheduler.Outcome) error {
	s := out.Summary
	var lines []string
	if n := s.Points[part.Failed]; n > 0 {
		lines = append(lines, fmt.Sprintf("%d points failed; points.parquet has the reason of each", n))
	}
	for _, a := range out.Aside {
		lines = append(lines, fmt.Sprintf("tile %.12s was set aside after %d attempts: %s", a.Tile, a.Attempts, a.Reason))
	}
	if s.OverAccuracy > 0 {
		lines = append(lines, fmt.Sprintf("%d of %d rows are less accurate than asked; they carry the flag accuracy", s.OverAccuracy, s.Rows))
	}
	if s.Partial {
		lines = append(lines, fmt.Sprintf("%d tiles are not solved yet; their points stand as failed", s.MissingTiles))
	}
	if len(lines) == 0 {
		return nil
	}
	return &endError{exitUnsolved, strings.Join(lines, "\n")}
}

// version names the program in run.json; tables of another version are
// joined anew.
func version() string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return "unknown"
	}
	for _, s := range info.Settings {
		if s.Key == "vcs.revision" {
			return info.Main.Version + " " + s.Value
		}
	}
	return info.Main.Version
}
