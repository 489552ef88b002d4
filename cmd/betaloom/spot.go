package main

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"betaloom/schema"
	"betaloom/schema/point"
	"betaloom/schema/sweep"
	"betaloom/solvers"
)

// spot is one point of a sweep's section, anywhere, and the number of a mode there.
type spot struct {
	physics schema.Physics
	values  []float64 // of the physics' parameters
	q       solvers.Q
	mode    int
}

// wavelength is the parameter, or what belongs to the frequency.
func (at *spot) wavelength() float64 {
	for i, p := range at.physics.Parameters {
		if p.Name == schema.Wavelength {
			return at.values[i]
		}
	}
	return 2 * math.Pi * schema.LightSpeed / at.q[0]
}

// spotOf reads name=value arguments: one for each axis, any for fixed parameters, and the mode's number.
func spotOf(s *sweep.Sweep, args []string) (*spot, error) {
	at := &spot{physics: s.Physics}
	at.physics.Parameters = slices.Clone(s.Physics.Parameters)
	given := map[string]bool{}
	for _, a := range s.Axes {
		if len(a.Values) == 1 {
			at.settle(a.Parameter, a.Values[0])
		}
	}
	for _, arg := range args {
		name, text, _ := strings.Cut(arg, "=")
		if given[name] {
			return nil, usage("fields: found %s twice, expected one value", name)
		}
		given[name] = true
		if err := at.take(name, text, arg); err != nil {
			return nil, err
		}
	}
	for _, p := range at.physics.Parameters {
		if p.Kind == schema.Axis {
			return nil, usage("fields: found no value for axis %s, expected %s=VALUE%s", p.Name, p.Name, rangeText(s, p.Name))
		}
	}
	return at, at.evaluate(s)
}

// rangeText is the range of an axis in brackets; a column of a points file has none.
func rangeText(s *sweep.Sweep, name string) string {
	for _, a := range s.Axes {
		if a.Parameter == name {
			return " (the sweep has " + axisText(&s.Physics, a) + ")"
		}
	}
	return ""
}

// take reads one argument.
func (at *spot) take(name, text, arg string) error {
	if name == "mode" {
		n, err := strconv.Atoi(text)
		if err != nil || n < 0 {
			return usage("fields: found %q, expected mode=N with N 0 or more", arg)
		}
		at.mode = n
		return nil
	}
	_, v, err := parseValue("fields", &at.physics, arg)
	if err != nil {
		return err
	}
	if q, _ := at.physics.Parameter(name); q.Kind == schema.Derived {
		return usage("fields: found a value for %s, which follows from others: %s", name, q.Expr)
	}
	at.settle(name, v)
	return nil
}

// settle gives a parameter a fixed value.
func (at *spot) settle(name string, v float64) {
	for i := range at.physics.Parameters {
		if p := &at.physics.Parameters[i]; p.Name == name {
			p.Kind, p.Value = schema.Fixed, v
		}
	}
}

// evaluate finds the derived parameters and the solver's point.
func (at *spot) evaluate(s *sweep.Sweep) error {
	p, err := point.New(&schema.Tile{Physics: at.physics})
	if err != nil {
		return err
	}
	kept, err := p.At(0)
	if err != nil {
		return usage("fields: %w", err)
	}
	if !kept {
		return usage("fields: found a point that the sweep excludes, expected one with %s", s.Physics.Keep)
	}
	at.values, at.q = slices.Clone(p.Values), slices.Clone(p.Q)
	return nil
}
