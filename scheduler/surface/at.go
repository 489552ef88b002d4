package surface

import (
	"fmt"
	"math"
	"strings"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

// maxWindow bounds the nodes of a window.
const maxWindow = 8192

// workspace is what one interpolation needs.
type workspace struct {
	lanes  []*lane // in the order of collapsing
	lane   []*lane // the same in file order
	rules  [][]rule
	tensor *tensor
	recent [8]*nodes // batches used lately, by number
	latest *nodes    // the last one
	family int
	index  []int
}

func newWorkspace(s *Surfaces) *workspace {
	k := len(s.meta.Sensitivities)
	ws := &workspace{tensor: newTensor(fErr + 2*k), lane: make([]*lane, len(s.axes)), index: make([]int, len(s.axes))}
	for _, i := range s.order {
		l := &lane{axis: s.axes[i]}
		ws.lanes = append(ws.lanes, l)
		ws.lane[i] = l
		ws.rules = append(ws.rules, s.axes[i].rules(k))
	}
	return ws
}

// At gives a family at a point of the box: values holds one SI value (radians for
// angles) an axis, in file order. Errors: *FamilyError, *RangeError, *AbsentError.
func (s *Surfaces) At(family string, values []float64) (Value, error) {
	var v Value
	err := s.AtTo(&v, family, values)
	return v, err
}

// AtTo is At into a value whose slices are used again.
func (s *Surfaces) AtTo(dst *Value, family string, values []float64) error {
	i, err := s.family(family)
	if err != nil {
		return err
	}
	if len(values) != len(s.axes) {
		return fmt.Errorf("surface: found %d values, expected one for each of %d axes", len(values), len(s.axes))
	}
	ws := s.spaces.Get().(*workspace)
	defer s.spaces.Put(ws)
	return s.evaluate(dst, ws, i, values)
}

func (s *Surfaces) evaluate(dst *Value, ws *workspace, family int, values []float64) (err error) {
	ws.family = family
	for k, l := range ws.lane {
		if l.cell, err = l.axis.locate(values[k]); err != nil {
			return err
		}
	}
	if err := s.window(ws); err != nil {
		return err
	}
	ws.interpolate()
	s.collect(dst, ws)
	return nil
}

// interpolate collapses all lanes.
func (ws *workspace) interpolate() {
	rest := 1
	for _, l := range ws.lanes {
		l.prepare()
		rest *= l.n
	}
	for i, l := range ws.lanes {
		rest /= l.n
		ws.tensor.collapse(l, ws.rules[i], rest, ws.lines(i+1))
	}
}

// lines numbers two lines of what remains from lane i on: through the
// nearest nodes of the other lanes, and through the second nearest.
func (ws *workspace) lines(i int) (at [2]int) {
	stride := 1
	for _, l := range ws.lanes[i:] {
		at[0] += stride * l.near[0]
		at[1] += stride * l.near[min(1, l.n-1)]
		stride *= l.n
	}
	return at
}

// collect writes the collapsed tensor as a Value.
func (s *Surfaces) collect(v *Value, ws *workspace) {
	x := ws.tensor
	get := func(f int) Bounded {
		b := Bounded{Value: x.values[f], Bound: x.noise[f]}
		if x.unbound[f] {
			b.Bound = math.NaN()
		}
		return b
	}
	k := len(s.meta.Sensitivities)
	v.FrequencyHz = s.frequency(ws)
	v.WavelengthM = schema.LightSpeed / v.FrequencyHz
	v.Neff, v.Ng, v.GVD, v.Beta3, v.Kappa = get(fNeff), get(fNg), get(fGVD), get(fBeta3), get(fKappa)
	v.D = times(v.GVD, perD(v.WavelengthM))
	v.DNeff, v.DNg = v.DNeff[:0], v.DNg[:0]
	for i := range k {
		v.DNeff = append(v.DNeff, get(fErr+i))
		v.DNg = append(v.DNg, get(fErr+k+i))
	}
}

// perD is D in ps/(nm km) over GVD in ps^2/km at a wavelength: -2 pi c/L^2.
func perD(wavelength float64) float64 {
	const perSI = 1e6 // of 1 s/m^2 in ps/(nm km)
	return -2 * math.Pi * schema.LightSpeed / (wavelength * wavelength) * siGVD * perSI
}

func times(b Bounded, factor float64) Bounded {
	return Bounded{Value: b.Value * factor, Bound: b.Bound * math.Abs(factor)}
}

func (s *Surfaces) frequency(ws *workspace) float64 {
	for _, l := range ws.lanes {
		if l.axis.frequency {
			return l.cell.t / (2 * math.Pi)
		}
	}
	return s.meta.FrequencyHz
}

// describe names the node at window positions index for people.
func (ws *workspace) describe(position func(k int) int) string {
	var parts []string
	for k, l := range ws.lane {
		x := l.axis.x[position(k)]
		parts = append(parts, l.axis.name+"="+quantity.Format(x, l.axis.dimension))
	}
	if parts == nil {
		return "the only point"
	}
	return strings.Join(parts, ", ")
}
