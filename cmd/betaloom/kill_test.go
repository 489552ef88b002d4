package main

import (
	"bytes"
	"crypto/sha256"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"

	"betaloom/scheduler"
	"betaloom/worker"
)

// killSweep has sixteen tiles of few points: each axis has one value more
// than the edge of a block.
const killSweep = `
format: 1
sweep: killed
materials:
  film: {named: silicon-nitride, add_index: shift}
  gel:  {index: cover}
  oxide: {named: fused-silica}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 9}
  height:     {from: 0.3 um, to: 0.9 um, count: 9}
  shift:      {from: -0.02, to: 0.02, count: 9}
  cover:      {from: 1.0, to: 1.5, count: 9}
section:
  layers:
    - {material: oxide}
    - {name: core, material: film, thickness: height}
    - {material: gel}
modes: 2
`

const killTiles = 16

// moments are where the process is killed: by point, the passes of it.
func moments() map[string][]int {
	return map[string][]int{
		scheduler.PointPublished: {1, 7, killTiles},
		worker.PointSolved:       {1, 2, 6, 11, killTiles},
		worker.PointWritten:      {1, 3, 8, 13, killTiles},
		scheduler.PointCollating: {1, 5, 10, killTiles},
		"before-rename":          {1, 2, 5, 9, 14},
	}
}

// TestKilledRunsEndTheSame kills a run at some twenty moments, each in a
// folder of its own, runs it again, and expects the bytes of a run that
// nothing disturbed, and no file beside those that it left.
func TestKilledRunsEndTheSame(t *testing.T) {
	sweep := writeSweep(t)
	want := runAndRead(t, sweep, 2)
	kills := 0
	for point, passes := range moments() {
		for _, n := range passes {
			kills++
			place := fmt.Sprintf("%s:%d", point, n)
			t.Run(place, func(t *testing.T) {
				dir := t.TempDir()
				kill(t, place, sweep, dir)
				start(t, "", sweep, "--out", dir, "--workers", "2")
				compare(t, read(t, dir), want)
			})
		}
	}
	if kills < 20 {
		t.Fatalf("%d moments, expected 20 or more", kills)
	}
}

// TestKilledAgainAndAgain kills one run at one moment after the other.
func TestKilledAgainAndAgain(t *testing.T) {
	sweep, dir := writeSweep(t), t.TempDir()
	want := runAndRead(t, sweep, 2)
	for _, place := range []string{"published-some:5", "solved:3", "part-written:4", "before-rename:6", "part-written:2", "collating:3", "collating:9"} {
		kill(t, place, sweep, dir)
	}
	start(t, "", sweep, "--out", dir, "--workers", "2")
	compare(t, read(t, dir), want)
}

// TestWorkersMakeNoDifference runs with one worker and with four.
func TestWorkersMakeNoDifference(t *testing.T) {
	sweep := writeSweep(t)
	compare(t, runAndRead(t, sweep, 4), runAndRead(t, sweep, 1))
}

func writeSweep(t *testing.T) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "killed.yaml")
	if err := os.WriteFile(path, []byte(killSweep), 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}

func runAndRead(t *testing.T, sweep string, workers int) map[string]string {
	t.Helper()
	dir := t.TempDir()
	start(t, "", sweep, "--out", dir, "--workers", fmt.Sprint(workers))
	return read(t, dir)
}

// kill runs until the process kills itself at the place, and asserts that it
// got there.
func kill(t *testing.T, place, sweep, dir string) {
	t.Helper()
	err := command(t, place, sweep, "--out", dir, "--workers", "2").Run()
	var ended *exec.ExitError
	if !errors.As(err, &ended) {
		t.Fatalf("%s: the run ended with %v, expected it to be killed", place, err)
	}
	if s, ok := ended.Sys().(syscall.WaitStatus); !ok || s.Signal() != syscall.SIGKILL {
		t.Fatalf("%s: the run ended with %v, expected it to be killed", place, err)
	}
}

// start runs to the end.
func start(t *testing.T, place, sweep string, flags ...string) {
	t.Helper()
	c := command(t, place, sweep, flags...)
	var said bytes.Buffer
	c.Stdout, c.Stderr = &said, &said
	if err := c.Run(); err != nil {
		t.Fatalf("run: %v\n%s", err, said.String())
	}
}

func command(t *testing.T, place, sweep string, flags ...string) *exec.Cmd {
	t.Helper()
	c := exec.CommandContext(t.Context(), "betaloom", append([]string{"run", sweep}, flags...)...)
	c.Env = append(os.Environ(), "CRASH="+place)
	return c
}

// read hashes what must not depend on how a run came about: the tables and
// the parts. Of the other files it notes the names.
func read(t *testing.T, dir string) map[string]string {
	t.Helper()
	files := map[string]string{}
	err := filepath.WalkDir(dir, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		name, err := filepath.Rel(dir, path)
		if err != nil {
			return err
		}
		files[name] = ""
		if strings.HasSuffix(name, ".parquet") || strings.HasSuffix(name, ".arrow") || name == "grid.json" {
			b, err := os.ReadFile(path)
			files[name] = fmt.Sprintf("%x", sha256.Sum256(b))
			return err
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"modes.parquet", "points.parquet", "surfaces.arrow", "report.html", "run.json"} {
		if _, ok := files[name]; !ok {
			t.Fatalf("the folder has no %s", name)
		}
	}
	return files
}

func compare(t *testing.T, got, want map[string]string) {
	t.Helper()
	for name, hash := range want {
		if found, ok := got[name]; !ok {
			t.Errorf("%s is missing", name)
		} else if found != hash {
			t.Errorf("%s differs", name)
		}
	}
	for name := range got {
		if _, ok := want[name]; !ok {
			t.Errorf("%s is there and should not be", name)
		}
	}
}
