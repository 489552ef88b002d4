package slab

import "math"

// span is the interval that holds the guided modes of a line, in a variable x
// in which M rises and is smooth at both ends: u = width cos x where a
// half-space gives the cut-off, else N = width - x^2.
type span struct {
	branch bool
	width  float64
	end    float64 // x at cut-off
	last   float64 // M there
}

func (s *span) at(x float64) (u, du float64) {
	if s.branch {
		if x == s.end {
			return 0, -s.width
		}
		sin, cos := math.Sincos(x)
		return s.width * cos, -s.width * sin
	}
	return s.width - x*x, -2 * x
}

// count finds how many modes a lossless line guides.
func (g *gauge) count() (span, int) {
	s := span{branch: g.branch}
	if g.ref < 0 || g.top <= 0 {
		return s, 0
	}
	s.width, s.end = g.top, math.Sqrt(g.top)
	if s.branch {
		s.width, s.end = math.Sqrt(g.top/g.sigma), math.Pi/2
	}
	u, _ := s.at(s.end)
	if !s.branch {
		u = 0
	}
	s.last, _ = g.phase(u)
	if !(s.last > 0) {
		return s, 0
	}
	return s, int(math.Ceil(s.last / math.Pi))
}

// locate finds the u of mode m by a Newton iteration on M kept inside
// a bracket, which is halved where Newton does not at least halve its steps.
func (g *gauge) locate(s *span, m int) float64 {
	goal := float64(m) * math.Pi
	lo, hi := 0.0, s.end
	x := s.end * (goal + math.Pi) / (s.last + math.Pi)
	before, moved := hi, hi
	for range 200 {
		u, du := s.at(x)
		v, slope := g.phase(u)
		v -= goal
		slope *= du
		if v > 0 {
			hi = x
		} else {
			lo = x
		}
		next := x - v/slope
		newton := next >= lo && next <= hi && math.Abs(next-x) <= before/2
		if !newton {
			next = lo + (hi-lo)/2
		}
		before, moved = moved, math.Abs(next-x)
		x = next
		if newton && moved <= 1e-8*s.end && math.Abs(v) < 1e-6 || hi-lo <= 2e-16*s.end {
			break
		}
	}
	u, _ := s.at(x)
	return u
}
