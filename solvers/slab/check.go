package slab

import (
	"fmt"
	"math"

	"betaloom/solvers"
	"betaloom/solvers/jet"
)

// maxOpticalThickness bounds k times a thickness: beyond it a phase has no
// digits left.
const maxOpticalThickness = 1e9

// check says what is wrong with a point, if anything is.
func check(w float64, s *Stack, params int) error {
	if !(w > 0) || math.IsInf(w, 0) {
		return &solvers.InputError{Where: "slab", Found: fmt.Sprintf("an angular frequency of %g rad/s", w), Expected: "a positive one"}
	}
	if len(s.Layers) == 0 {
		return &solvers.InputError{Where: "slab", Found: "no layer", Expected: "one or more"}
	}
	for i := range s.Layers {
		if err := checkLayer(w, s, i, params); err != nil {
			return err
		}
	}
	return nil
}

func checkLayer(w float64, s *Stack, i, params int) error {
	l := &s.Layers[i]
	open := i == 0 && !s.GroundBottom || i == len(s.Layers)-1 && !s.GroundTop
	if l.HalfSpace && !open {
		return bad(i, "a half-space", "a thickness")
	}
	if !l.HalfSpace && open {
		return bad(i, "a thickness", "a half-space at the open end of a stack")
	}
	if l.HalfSpace && len(s.Layers) == 1 {
		return bad(i, "a single half-space", "a second layer")
	}
	for c := range l.Eps {
		if l.Eps[c].V == 0 || !finite(&l.Eps[c], params) {
			return bad(i, fmt.Sprintf("a relative permittivity of %v along %c", l.Eps[c].V, "xyz"[c]), "a finite one other than zero, with finite derivatives")
		}
	}
	if l.HalfSpace {
		return nil
	}
	return checkThickness(w, l, i, params)
}

func checkThickness(w float64, l *Layer, i, params int) error {
	t := l.Thickness.V
	if !(real(t) >= 0) || imag(t) != 0 || !finite(&l.Thickness, params) {
		return bad(i, fmt.Sprintf("a thickness of %v m", t), "a real one, zero or more")
	}
	n := math.Sqrt(max(abs(l.Eps[0].V), abs(l.Eps[1].V), abs(l.Eps[2].V)))
	if !(n*real(t)*w/lightSpeed < maxOpticalThickness) {
		return bad(i, fmt.Sprintf("a thickness of %g m", real(t)), fmt.Sprintf("less than %.0g radians of phase across it", maxOpticalThickness))
	}
	return nil
}

func bad(layer int, found, expected string) error {
	return &solvers.InputError{Where: fmt.Sprintf("layer %d", layer), Found: found, Expected: expected}
}

// finite reports whether every number of a jet is, and its gradients have
// one entry a parameter or none.
func finite(j *jet.Jet, params int) bool {
	if j.P != nil && len(j.P) != params || j.WP != nil && len(j.WP) != params {
		return false
	}
	rest := nought(j.V) + nought(j.W) + nought(j.WW) + nought(j.WWW)
	for _, v := range j.P {
		rest += nought(v)
	}
	for _, v := range j.WP {
		rest += nought(v)
	}
	return rest == 0
}

// nought is zero for what is finite, and NaN for anything else.
func nought(v complex128) float64 { return 0*real(v) + 0*imag(v) }

// lossless reports whether the permittivities and their derivatives in
// frequency are real and positive in value.
func lossless(s *Stack) bool {
	if !realStack(s) {
		return false
	}
	for i := range s.Layers {
		for c := range s.Layers[i].Eps {
			if real(s.Layers[i].Eps[c].V) < 0 {
				return false
			}
		}
	}
	return true
}

// realStack reports whether the permittivities and their derivatives in
// frequency are real.
func realStack(s *Stack) bool {
	for i := range s.Layers {
		for c := range s.Layers[i].Eps {
			e := &s.Layers[i].Eps[c]
			if imag(e.V) != 0 || imag(e.W) != 0 || imag(e.WW) != 0 || imag(e.WWW) != 0 {
				return false
			}
		}
	}
	return true
}

func abs(z complex128) float64 { return length(real(z), imag(z)) }
