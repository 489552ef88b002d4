package scheduler

import (
	"encoding/json"
	"errors"
	"fmt"

	"betaloom/scheduler/grid"
	"betaloom/schema"
	"betaloom/schema/queue"
	"betaloom/schema/sweep"
	"betaloom/solvers"
	"betaloom/solvers/choose"
	"betaloom/solvers/material"
)

// Plan is a sweep as it will be run.
type Plan struct {
	Grid     *grid.Grid
	Reasons  []string // for the equation
	Warnings []string // part of the points will fail, and why
}

// NewPlan checks what can be told before anything is solved. file is the name
// of the sweep file in messages. The error is sweep.Diagnostics where the
// sweep file is wrong, *solvers.ScopeError where the section needs an
// equation that is not solved yet.
func NewPlan(file string, sw *sweep.Sweep) (*Plan, error) {
	g, err := grid.New(sw.Physics, sw.Axes, sw.Columns, sw.Rows)
	if err != nil {
		return nil, sweep.Diagnostics{diagnose(file, sw, "parameters", err.Error(), "a smaller grid")}
	}
	p := &Plan{Grid: g}
	if found := p.checkMaterials(file, sw); len(found) > 0 {
		return nil, found
	}
	_, reasons, err := choose.New(&sw.Physics)
	var input *solvers.InputError
	if errors.As(err, &input) {
		return nil, sweep.Diagnostics{diagnose(file, sw, "section", input.Where+": "+input.Found, input.Expected)}
	}
	p.Reasons = reasons
	if err != nil {
		return nil, err
	}
	return p, p.checkMessage(file, sw)
}

// What a job message holds besides the physics, at most: the run, names
// of columns and of the tile; a number with its comma, "-1.2345678901234567e-300,".
const (
	roomForRun    = 64 << 10
	roomForNumber = 26
)

// checkMessage sees that a tile fits into a message, which its tables may
// be too long for: a tile needs nothing outside itself, so it carries them.
func (p *Plan) checkMessage(file string, sw *sweep.Sweep) error {
	t := p.Grid.Tile(0) // no tile of the grid has more numbers
	b, err := json.Marshal(t.Physics)
	if err != nil {
		return fmt.Errorf("tile: %w", err)
	}
	numbers := len(t.Rows) * len(t.Columns)
	for _, a := range t.Axes {
		numbers += len(a.Values)
	}
	size := len(b) + roomForNumber*numbers
	if size+roomForRun <= queue.MaxJob {
		return nil
	}
	longest, rows := "", 0
	for _, name := range used(&sw.Physics) {
		if t := sw.Physics.Materials[name].Table; t != nil && len(t.N) > rows {
			longest, rows = name, len(t.N)
		}
	}
	return sweep.Diagnostics{diagnose(file, sw, "materials."+longest,
		fmt.Sprintf("a table of %d rows, with which a tile takes %d bytes", rows, size),
		fmt.Sprintf("tiles of at most %d bytes, the most that a message of the queue holds: a table of fewer rows serves as well, since it is fitted", queue.MaxJob-roomForRun))}
}

func diagnose(file string, sw *sweep.Sweep, path, found, expected string) sweep.Diagnostic {
	line, column := sw.At(path)
	return sweep.Diagnostic{File: file, Line: line, Column: column, Path: path, Found: found, Expected: expected}
}

// checkMaterials compiles every material of the section and holds the grid's
// wavelengths to the ranges they are known in.
func (p *Plan) checkMaterials(file string, sw *sweep.Sweep) (found sweep.Diagnostics) {
	waves := wavelengths(p.Grid)
	for _, name := range used(&sw.Physics) {
		m, err := material.Compile(name, sw.Physics.Materials[name])
		var input *solvers.InputError
		if errors.As(err, &input) {
			found = append(found, diagnose(file, sw, "materials."+name, input.Found, input.Expected))
			continue
		}
		if err != nil {
			found = append(found, diagnose(file, sw, "materials."+name, err.Error(), "a material"))
			continue
		}
		outside, why := waves.outside(m)
		switch {
		case outside == 0:
		case outside == len(waves.values):
			found = append(found, diagnose(file, sw, waves.path, waves.text(), fmt.Sprintf("%s, where material %s is known", why, name)))
		default:
			p.Warnings = append(p.Warnings, fmt.Sprintf("%d of %d values of %s are outside %s, where material %s is known: the points there will fail",
				outside, len(waves.values), waves.parameter, why, name))
		}
	}
	return found
}

// used lists the materials that the section names, each once, in its order.
func used(p *schema.Physics) []string {
	var names []string
	seen := make(map[string]bool)
	add := func(name string) {
		if _, known := p.Materials[name]; known && !seen[name] {
			seen[name] = true
			names = append(names, name)
		}
	}
	layers := func(list []schema.Layer) {
		for _, l := range list {
			add(l.Material)
			add(l.Fill)
			for _, s := range l.Strips {
				add(s.Material)
			}
		}
	}
	switch s := p.Section; {
	case s.Layers != nil:
		layers(s.Layers.Layers)
	case s.Circular != nil:
		for _, r := range s.Circular.Layers {
			add(r.Material)
		}
		add(s.Circular.Wall)
	case s.Pipe != nil:
		add(s.Pipe.Fill)
		layers(s.Pipe.FillLayers)
		add(s.Pipe.Wall)
	}
	return names
}
