package main

import (
	"encoding/json"
	"fmt"
	"runtime"
	"strings"
	"time"

	"betaloom/scheduler"
	"betaloom/schema/quantity"
	"betaloom/schema/sweep"
	"betaloom/solvers/material"
)

type checkCommand struct {
	Sweep   string `arg:"" help:"The sweep file."`
	Workers int    `help:"Estimate the time with this many workers; 0: one for each processor." default:"0"`
	JSON    bool   `help:"Write JSON."`
}

// Help shows the command by example.
func (checkCommand) Help() string {
	return `Examples:

  betaloom check nitride-film.yaml

Nothing is written and nothing but a few sample points is solved. All that
is wrong with the file is listed at once, with line and column.`
}

// plan is what check says, for a program.
type plan struct {
	Sweep         string     `json:"sweep"`
	Reasons       []string   `json:"reasons"`
	Warnings      []string   `json:"warnings,omitempty"`
	Axes          []planAxis `json:"axes"`
	Points        int        `json:"points"`
	Tiles         int        `json:"tiles"`
	Workers       int        `json:"workers"`
	PointsPerCore float64    `json:"points_per_core_second"`
	ModesPerPoint float64    `json:"modes_per_point"`
	Seconds       float64    `json:"estimated_seconds"`
	Bytes         int64      `json:"estimated_bytes"`
}

type planAxis struct {
	Parameter string `json:"parameter"`
	Count     int    `json:"count"`
	From      string `json:"from"`
	To        string `json:"to"`
}

// Run reads a sweep file and says what a run would do.
func (c *checkCommand) Run(con *console) error {
	if c.Workers < 0 {
		return usage("check: found %d workers, expected 1 or more", c.Workers)
	}
	s, err := loadSweep(c.Sweep)
	if err != nil {
		return err
	}
	p, err := scheduler.NewPlan(c.Sweep, s)
	if err != nil {
		return err
	}
	workers := workersOr(c.Workers)
	e, err := p.Estimate(con.ctx, workers)
	if err != nil {
		return err
	}
	out := plan{
		Sweep: s.Name, Reasons: p.Reasons, Warnings: p.Warnings, Axes: planAxes(s),
		Points: p.Grid.Points(), Tiles: p.Grid.Tiles(), Workers: workers,
		PointsPerCore: e.PointsPerSecond, ModesPerPoint: e.ModesPerPoint,
		Seconds: e.Time.Seconds(), Bytes: e.DiskBytes,
	}
	if c.JSON {
		enc := json.NewEncoder(con.out)
		enc.SetIndent("", "  ")
		return enc.Encode(out)
	}
	out.write(con)
	return nil
}

func (p *plan) write(con *console) {
	fmt.Fprintf(con.out, "sweep     %s\n", p.Sweep)
	for i, r := range p.Reasons {
		fmt.Fprintf(con.out, "%-10s%s\n", label(i, "equation"), r)
	}
	for i, a := range p.Axes {
		fmt.Fprintf(con.out, "%-10s%s: %d values, %s to %s\n", label(i, "axes"), a.Parameter, a.Count, a.From, a.To)
	}
	fmt.Fprintf(con.out, "grid      %s in %s\n", several(p.Points, "point"), several(p.Tiles, "tile"))
	took := time.Duration(p.Seconds * float64(time.Second))
	fmt.Fprintf(con.out, "estimate  %s with %s, %s on disk (from sample points: %s points a second and core, %.3g modes each)\n",
		roughly(took), several(p.Workers, "worker"), bytesText(p.Bytes), compact(p.PointsPerCore), p.ModesPerPoint)
	for _, w := range p.Warnings {
		fmt.Fprintf(con.out, "warning   %s\n", w)
	}
}

func label(i int, name string) string {
	if i > 0 {
		return ""
	}
	return name
}

func planAxes(s *sweep.Sweep) []planAxis {
	list := []planAxis{}
	for _, a := range s.Axes {
		q, _ := s.Physics.Parameter(a.Parameter)
		n := len(a.Values)
		list = append(list, planAxis{a.Parameter, n, quantity.Format(a.Values[0], q.Dimension), quantity.Format(a.Values[n-1], q.Dimension)})
	}
	return list
}

func roughly(d time.Duration) string {
	switch {
	case d < time.Second:
		return "under a second"
	case d < time.Minute:
		return d.Round(time.Second).String()
	}
	return strings.TrimSuffix(d.Round(time.Minute).String(), "0s")
}

// several counts things.
func several(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return fmt.Sprintf("%d %ss", n, thing)
}

// bytesText gives a size with two digits or all before the point.
func bytesText(n int64) string {
	v, unit := float64(n)/1e3, "kB"
	switch {
	case n >= 1e9:
		v, unit = v/1e6, "GB"
	case n >= 1e6:
		v, unit = v/1e3, "MB"
	}
	if v < 10 {
		return fmt.Sprintf("%.1f %s", v, unit)
	}
	return fmt.Sprintf("%.0f %s", v, unit)
}

// loadSweep reads a sweep file; one that cannot be read is a fault of the
// command line.
func loadSweep(path string) (*sweep.Sweep, error) {
	var builtin []string
	for _, m := range material.Named() {
		builtin = append(builtin, m.Name)
	}
	s, err := sweep.Load(path, builtin)
	if err != nil && isPathError(err) {
		return nil, &usageError{err}
	}
	return s, err
}

func workersOr(n int) int {
	if n > 0 {
		return n
	}
	return runtime.NumCPU()
}
