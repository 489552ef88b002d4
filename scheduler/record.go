package scheduler

import (
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"time"

	"betaloom/scheduler/collate"
	"betaloom/scheduler/grid"
	"betaloom/schema"
	"betaloom/schema/store"
	"betaloom/schema/sweep"
)

// FormatFolder is the version of the run folder.
const FormatFolder = 1

// The files of a run folder that this package writes.
const (
	fileSweep    = "sweep.yaml"
	fileGrid     = "grid.json"
	fileRun      = "run.json"
	fileProgress = "progress.json"
	fileLock     = ".lock"
	folderQueue  = "queue"
)

// RunState says where a run stands.
type RunState string

// The states of a run.
const (
	Running     RunState = "running" // or killed: see Status.Running
	Interrupted RunState = "interrupted"
	Broken      RunState = "broken"     // the program failed; Record.Error says why
	Complete    RunState = "complete"   // every tile has its part
	Incomplete  RunState = "incomplete" // the rest was set aside
)

// Record is the content of run.json.
type Record struct {
	Format      int      `json:"format"` // FormatFolder
	ID          string   `json:"id"`     // UUIDv7
	Sweep       string   `json:"sweep"`  // its name
	SweepSHA256 string   `json:"sweep_sha256"`
	Physics     int      `json:"physics_format"`
	Program     string   `json:"program"` // version of the program that ran last
	State       RunState `json:"state"`
	Error       string   `json:"error,omitempty"`
	Reasons     []string `json:"reasons"` // for the equation

	Points  int `json:"points"`
	Tiles   int `json:"tiles"`
	Aside   int `json:"tiles_set_aside"`
	Refused int `json:"messages_refused"`
	Workers int `json:"workers"`
	Starts  int `json:"starts"` // how often the run was started

	Started        time.Time `json:"started"` // first
	Ended          time.Time `json:"ended,omitzero"`
	SolveSeconds   float64   `json:"solve_seconds"` // over all starts that came to an end
	CollateSeconds float64   `json:"collate_seconds"`
	ReportSeconds  float64   `json:"report_seconds"`

	Tables *Tables          `json:"tables,omitempty"` // nil: not collated yet
	Result *collate.Summary `json:"result,omitempty"` // of the tables: counts, accuracy reached

	Reported string `json:"reported,omitempty"` // Tables.From of those that the run's report shows
}

// Tables says what the tables in a folder were made from.
type Tables struct {
	From    string           `json:"from"`  // hash of tiles, records of those set aside, and program
	Bytes   map[string]int64 `json:"bytes"` // size of each file
	Partial bool             `json:"partial,omitempty"`
}

// ReadRecord reads run.json of a folder.
func ReadRecord(dir string) (*Record, error) {
	r := new(Record)
	if err := readJSON(filepath.Join(dir, fileRun), r); err != nil {
		return nil, err
	}
	if r.Format != FormatFolder {
		return nil, fmt.Errorf("run: %s: found format %d, expected %d", filepath.Join(dir, fileRun), r.Format, FormatFolder)
	}
	return r, nil
}

// resolved is the content of grid.json.
type resolved struct {
	Physics schema.Physics     `json:"physics"`
	Axes    []schema.AxisBlock `json:"axes,omitempty"`
	Columns []string           `json:"columns,omitempty"`
	Rows    [][]float64        `json:"rows,omitempty"`
}

func resolve(sw *sweep.Sweep) resolved {
	return resolved{Physics: sw.Physics, Axes: sw.Axes, Columns: sw.Columns, Rows: sw.Rows}
}

// ReadGrid gives the grid of a run folder.
func ReadGrid(dir string) (*grid.Grid, error) {
	var r resolved
	if err := readJSON(filepath.Join(dir, fileGrid), &r); err != nil {
		return nil, err
	}
	g, err := grid.New(r.Physics, r.Axes, r.Columns, r.Rows)
	if err != nil {
		return nil, fmt.Errorf("run: %s: %w", filepath.Join(dir, fileGrid), err)
	}
	return g, nil
}

func readJSON(path string, to any) error {
	b, err := os.ReadFile(path)
	if err != nil {
		return fmt.Errorf("run: %w", err)
	}
	if err := json.Unmarshal(b, to); err != nil {
		return fmt.Errorf("run: %s: %w", path, err)
	}
	return nil
}

func writeJSON(path string, v any, indent string) error {
	b, err := encodeJSON(v, indent)
	if err == nil {
		err = store.WriteFile(path, b)
	}
	if err != nil {
		return fmt.Errorf("run: %s: %w", path, err)
	}
	return nil
}

func encodeJSON(v any, indent string) ([]byte, error) {
	b, err := json.Marshal(v)
	if err == nil && indent != "" {
		b, err = json.MarshalIndent(v, "", indent)
	}
	return append(b, '\n'), err
}
