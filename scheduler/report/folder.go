package report

import (
	"cmp"
	"context"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"

	"betaloom/scheduler/grid"
	"betaloom/schema"
)

// question is the part of grid.json that the page needs.
type question struct {
	Physics schema.Physics     `json:"physics"`
	Axes    []schema.AxisBlock `json:"axes"`
	Columns []string           `json:"columns"`
	Rows    [][]float64        `json:"rows"`
}

// record is the part of run.json that the page needs. Times of day and what
// changes after the page is written are left alone.
type record struct {
	Sweep          string   `json:"sweep"`
	Program        string   `json:"program"`
	Reasons        []string `json:"reasons"`
	Tiles          int      `json:"tiles"`
	Aside          int      `json:"tiles_set_aside"`
	Refused        int      `json:"messages_refused"`
	Workers        int      `json:"workers"`
	Starts         int      `json:"starts"`
	SolveSeconds   float64  `json:"solve_seconds"`
	CollateSeconds float64  `json:"collate_seconds"`
}

// Load gathers a page's data from a run's folder.
func Load(ctx context.Context, dir string) (*Data, error) {
	var q question
	if err := readJSON(filepath.Join(dir, "grid.json"), &q); err != nil {
		return nil, err
	}
	var r record
	if err := readJSON(filepath.Join(dir, "run.json"), &r); err != nil {
		return nil, err
	}
	d, err := newData(r.Sweep, q)
	if err != nil {
		return nil, err
	}
	d.Equation = Equation{Reasons: r.Reasons}
	if err := d.scanPoints(ctx, filepath.Join(dir, "points.parquet")); err != nil {
		return nil, err
	}
	if err := d.scanModes(ctx, filepath.Join(dir, "modes.parquet")); err != nil {
		return nil, err
	}
	d.sort()
	if err := d.readZeros(dir); err != nil {
		return nil, err
	}
	d.Cost = r.cost(d)
	return d, d.listFiles(dir)
}

func readJSON(path string, to any) error {
	b, err := os.ReadFile(path)
	if err != nil {
		return err
	}
	if err := json.Unmarshal(b, to); err != nil {
		return fmt.Errorf("%s: %w", filepath.Base(path), err)
	}
	return nil
}

// newData makes the data of a sweep of which no point is known yet.
func newData(name string, q question) (*Data, error) {
	for i, row := range q.Rows {
		if len(row) != len(q.Columns) {
			return nil, fmt.Errorf("grid.json: row %d: found %d values, expected %d", i, len(row), len(q.Columns))
		}
	}
	g, err := grid.New(q.Physics, q.Axes, q.Columns, q.Rows)
	if err != nil {
		return nil, fmt.Errorf("grid.json: %w", err)
	}
	d := &Data{Name: name, Physics: q.Physics, Axes: q.Axes, Columns: q.Columns, Rows: q.Rows, Points: g.Points(),
		States: map[string]int{}, Guided: map[int]int{}}
	if g.IsBox() {
		d.View = newBoxView(q.Axes)
	} else {
		d.View = newRowsView(d.Points)
	}
	d.Count, d.Excluded = make([]float64, d.View.Slots()), make([]bool, d.View.Slots())
	for i := range d.Count {
		d.Count[i] = math.NaN()
	}
	return d, nil
}

// sort puts what was scanned in the page's order.
func (d *Data) sort() {
	slices.SortFunc(d.Families, func(a, b *Family) int {
		return cmp.Or(-cmp.Compare(a.Range[Neff].Hi, b.Range[Neff].Hi), cmp.Compare(a.Name, b.Name))
	})
	slices.SortFunc(d.Reasons, func(a, b Reason) int {
		return cmp.Or(-cmp.Compare(a.N, b.N), cmp.Compare(a.State, b.State), cmp.Compare(a.Text, b.Text))
	})
	slices.SortFunc(d.Flags, func(a, b Tally) int { return cmp.Or(-cmp.Compare(a.N, b.N), cmp.Compare(a.Text, b.Text)) })
}

func (r record) cost(d *Data) []Fact {
	facts := []Fact{{"Solving", seconds(r.SolveSeconds) + " with " + several(r.Workers, "worker")}}
	if r.SolveSeconds > 0 && r.Starts == 1 { // else some points took time that nobody has counted
		done := d.States["solved"] + d.States["no-mode"]
		facts = append(facts, Fact{"Rate", short(float64(done)/r.SolveSeconds, 3) + " points a second"})
	}
	facts = append(facts, Fact{"Joining into tables", seconds(r.CollateSeconds)})
	tiles := several(r.Tiles, "tile")
	if r.Aside > 0 {
		tiles += ", of which " + count(r.Aside) + " set aside"
	}
	facts = append(facts, Fact{"Jobs", tiles})
	if r.Starts > 1 {
		facts = append(facts, Fact{"Started", several(r.Starts, "time")})
	}
	if r.Refused > 0 {
		facts = append(facts, Fact{"Messages refused", count(r.Refused)})
	}
	return append(facts, Fact{"Program", r.Program})
}

// listFiles names the files of the folder that are there.
func (d *Data) listFiles(dir string) error {
	for _, f := range []File{
		{Name: "sweep.yaml", What: "the question, as given"},
		{Name: "run.json", What: "the run: versions, hashes, times"},
		{Name: "points.parquet", What: "one row a point: parameters, number of modes, state, reason"},
		{Name: "modes.parquet", What: "one row a point and mode: all values with their bounds"},
		{Name: "surfaces.arrow", What: "by family: dense arrays over the axes"},
	} {
		st, err := os.Stat(filepath.Join(dir, f.Name))
		if os.IsNotExist(err) {
			continue
		}
		if err != nil {
			return err
		}
		if f.Name != "run.json" { // which is written again after the page
			f.Bytes = st.Size()
		}
		d.Files = append(d.Files, f)
	}
	return nil
}
