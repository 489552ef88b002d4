package surface

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"sync"
	"testing"

	"betaloom/schema"
)

func wavelengths(n int) schema.AxisBlock { return span("wavelength", 1.30e-6, 1.70e-6, n) }
func thickness(n int) schema.AxisBlock   { return span("thickness", 0.4e-6, 1.0e-6, n) }
func shifts(n int) schema.AxisBlock      { return span("index_shift", -0.01, 0.01, n) }

// uneven moves the inner values of an axis, for spacings that differ by up
// to a factor of two.
func uneven(a schema.AxisBlock) schema.AxisBlock {
	n := len(a.Values)
	lo, hi := a.Values[0], a.Values[n-1]
	for i := 1; i < n-1; i++ {
		x := (a.Values[i] - lo) / (hi - lo)
		a.Values[i] = lo + (hi-lo)*(x+0.35*math.Sin(2*math.Pi*x)/(2*math.Pi))
	}
	return a
}

// tally compares one quantity at many points with its exact values.
type tally struct {
	name   string
	worst  float64   // true error
	above  float64   // largest error over bound
	bounds []float64 // bound over error
}

// add takes a value; rounding is that of the exact value itself.
func (y *tally) add(b Bounded, exact, rounding float64) {
	e := math.Abs(b.Value - exact)
	y.worst = max(y.worst, e)
	if e > rounding {
		y.above = max(y.above, (e-rounding)/b.Bound)
	}
	y.bounds = append(y.bounds, b.Bound/max(e, rounding))
}

func (y *tally) median() float64 {
	slices.Sort(y.bounds)
	return y.bounds[len(y.bounds)/2]
}

// tallies looks at n random points of the box, for one family.
func tallies(t testing.TB, s *Surfaces, axes []schema.AxisBlock, m, n int) []tally {
	t.Helper()
	list := []tally{{name: "neff"}, {name: "ng"}, {name: "gvd"}, {name: "beta3"}, {name: "dneff/dthickness"}, {name: "dneff/dshift"}, {name: "dng/dthickness"}, {name: "dng/dshift"}}
	p := slabSweep(axes)
	r := rand.New(rand.NewPCG(1, uint64(m)))
	for range n {
		values := anywhere(r, axes)
		exact := slabTE(m, at(p, axes, values))
		v, err := s.At(fmt.Sprintf("TE%d", m), values)
		if absent := (*AbsentError)(nil); errors.As(err, &absent) {
			continue
		} else if err != nil {
			t.Fatal(err)
		}
		if !exact.guided {
			t.Fatalf("TE%d at %v: found %+v, expected an error: it is cut off there", m, values, v.Neff)
		}
		list[0].add(v.Neff, exact.neff, 1e-15)
		list[1].add(v.Ng, exact.ng, 1e-14)
		list[2].add(v.GVD, exact.gvd, 1e-10)
		list[3].add(v.Beta3, exact.beta3, 1e-11)
		list[4].add(v.DNeff[0], exact.dneffD, 1e-9)
		list[5].add(v.DNeff[1], exact.dneffS, 1e-15)
		list[6].add(v.DNg[0], exact.dngD, 1e-8)
		list[7].add(v.DNg[1], exact.dngS, 1e-14)
	}
	if len(list[0].bounds) < n/4 {
		t.Fatalf("TE%d: found %d points inside its surface, expected at least %d", m, len(list[0].bounds), n/4)
	}
	return list
}

func anywhere(r *rand.Rand, axes []schema.AxisBlock) []float64 {
	values := make([]float64, len(axes))
	for i, a := range axes {
		lo, hi := slices.Min(a.Values), slices.Max(a.Values)
		values[i] = lo + (hi-lo)*r.Float64()
	}
	return values
}

// The bounds hold at random points of grids that resolve the slab, up to and around the cut-off of
// TE1, against its closed form (slab_test.go).
func TestBoundsHold(t *testing.T) {
	grids := map[string][]schema.AxisBlock{
		"81x61x3":             {wavelengths(81), thickness(61), shifts(3)},
		"21x16x3":             {wavelengths(21), thickness(16), shifts(3)},
		"11x9x2":              {wavelengths(11), thickness(9), shifts(2)},
		"uneven 41x31x5":      {uneven(wavelengths(41)), uneven(thickness(31)), shifts(5)},
		"uneven 15x12x4":      {uneven(wavelengths(15)), uneven(thickness(12)), shifts(4)},
		"thickness first":     {thickness(25), wavelengths(20)},
		"thickness, 3 shifts": {thickness(31), shifts(3)},
		"2 thicknesses":       {wavelengths(41), span("thickness", 0.70e-6, 0.72e-6, 2)},
		"wavelength 81":       {wavelengths(81)},
		"wavelength 11":       {wavelengths(11)},
		"wavelength 5":        {wavelengths(5)},
		"wavelength 3":        {wavelengths(3)},
		"wavelength 2":        {wavelengths(2)},
		"thickness 61":        {thickness(61)},
		"thickness 16":        {thickness(16)},
		"thickness 8":         {thickness(8)},
		"shift 3":             {shifts(3)},
		"shift 2":             {shifts(2)},
	}
	for name, axes := range grids {
		t.Run(name, func(t *testing.T) {
			s := writeSlab(t, axes, 2)
			for m := range 2 {
				for _, y := range tallies(t, s, axes, m, 2000) {
					t.Logf("TE%d %-16s error at most %.1e, over its bound %.2f, bound over error median %.0f", m, y.name, y.worst, y.above, y.median())
					if !(y.above <= 1) {
						t.Errorf("TE%d %s: found an error %.2f times its bound", m, y.name, y.above)
					}
				}
			}
		})
	}
}

// The size of the main example: neff of a smooth surface to 1e-9 with a bound that is
// typically within a hundred times the error.
func TestAccuracy(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(81), thickness(61), shifts(3)}
	s := writeSlab(t, axes, 1)
	list := tallies(t, s, axes, 0, 8000)
	neff := list[0]
	if neff.worst > 1e-11 { // 1e-12 measured
		t.Errorf("neff: found an error of %.2g, expected below 1e-11", neff.worst)
	}
	if m := neff.median(); m > 100 {
		t.Errorf("neff: found bounds of %.0f times the error in the middle, expected below 100", m)
	}
	if list[2].worst > 5e-3 { // 1e-3 ps^2/km measured, from three nodes in the index
		t.Errorf("GVD: found an error of %.2g ps^2/km, expected below 5e-3", list[2].worst)
	}
}

// At a node the values and the bounds are those of its row, also where the
// node is given through a unit's rounding.
func TestNodes(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(9), thickness(7), {Parameter: "index_shift", Values: []float64{0.01, -0.01, 0}}}
	s := writeSlab(t, axes, 1)
	p := slabSweep(axes)
	tile := schema.Tile{Axes: axes}
	for node := range nodesOf(axes) {
		values := tile.Values(node, nil)
		exact := slabTE(0, at(p, axes, values))
		for i := range values {
			values[i] *= 1 + 0x1p-52
		}
		v, err := s.At("TE0", values)
		if err != nil {
			t.Fatal(err)
		}
		if v.Neff != (Bounded{exact.neff, testErr}) || v.GVD.Value != exact.gvd || v.DNg[0].Value != exact.dngD || v.Kappa != (Bounded{}) {
			t.Fatalf("node %d: found %+v, expected %+v", node, v, exact)
		}
		d := -2 * math.Pi * schema.LightSpeed / math.Pow(axes[0].Values[node/21], 2) * exact.gvd * 1e-27 * 1e6 // s/m^2 to ps/(nm km)
		if math.Abs(v.D.Value-d) > 1e-12*math.Abs(d) {
			t.Fatalf("node %d: found D = %g, expected %g", node, v.D.Value, d)
		}
	}
}

// An axis of frequency gives the values that one of wavelength does.
func TestFrequencyAxis(t *testing.T) {
	const c = schema.LightSpeed
	p := slabSweep(nil)
	p.Parameters[0] = schema.Parameter{Name: "frequency", Kind: schema.Axis, Dimension: schema.Dimension{Time: -1}}
	axes := []schema.AxisBlock{span("frequency", c/1.7e-6, c/1.3e-6, 21)}
	s := writeRows(t, p, axes, func(values []float64) []slabValues {
		return []slabValues{slabTE(0, slabPoint{w: 2 * math.Pi * values[0], d: 0.8e-6})}
	})
	for _, f := range []float64{1.77e14, 1.901e14, 2.3055e14} {
		v, err := s.At("TE0", []float64{f})
		exact := slabTE(0, slabPoint{w: 2 * math.Pi * f, d: 0.8e-6})
		if err != nil || math.Abs(v.Neff.Value-exact.neff) > 1e-12 || math.Abs(v.GVD.Value-exact.gvd) > v.GVD.Bound {
			t.Errorf("%g Hz: found %+v, %v, expected %+v", f, v, err, exact)
		}
		if math.Abs(v.WavelengthM*f/c-1) > 1e-15 {
			t.Errorf("%g Hz: found %g m, expected %g", f, v.WavelengthM, c/f)
		}
	}
}

// An angle has its sensitivities by degree and its axis in radians; a tilt that acts
// as thickness/cos(tilt) is exact by the chain rule.
func TestAngleAxis(t *testing.T) {
	p := slabSweep(nil)
	p.Parameters[1] = schema.Parameter{Name: "tilt", Kind: schema.Axis, Dimension: schema.Dimension{Angle: 1}}
	axes := []schema.AxisBlock{span("tilt", 0.1, 0.7, 7)}
	tilted := func(tilt float64) slabValues {
		v := slabTE(0, slabPoint{w: 2 * math.Pi * schema.LightSpeed / 1.5e-6, d: 0.5e-6 / math.Cos(tilt)})
		chain := 0.5e-6 * math.Sin(tilt) / math.Pow(math.Cos(tilt), 2) * math.Pi / 180
		v.dneffD, v.dngD = v.dneffD*chain, v.dngD*chain
		return v
	}
	s := writeRows(t, p, axes, func(values []float64) []slabValues { return []slabValues{tilted(values[0])} })
	for _, tilt := range []float64{0.15, 0.333, 0.68} {
		v, err := s.At("TE0", []float64{tilt})
		exact := tilted(tilt)
		// Wrong slopes would leave an error of their own size, 1e-3.
		if e := math.Abs(v.Neff.Value - exact.neff); err != nil || e > 1e-7 || e > v.Neff.Bound {
			t.Errorf("tilt %g: found %+v, %v, expected %.12f", tilt, v.Neff, err, exact.neff)
		}
	}
}

// Where a derived parameter follows the wavelength, ng is not the slope of
// the surface: interpolation does without it and stays true.
func TestDerivedFollowsFrequency(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(41)}
	film := func(wavelength float64) slabValues {
		return slabTE(0, slabPoint{w: 2 * math.Pi * schema.LightSpeed / wavelength, d: 0.5 * wavelength})
	}
	p := slabSweep(axes)
	p.Parameters = append(p.Parameters, schema.Parameter{Name: "film", Kind: schema.Derived, Dimension: schema.Dimension{Length: 1}, Expr: "0.5 * wavelength"})
	s := writeRows(t, p, axes, func(values []float64) []slabValues { return []slabValues{film(values[0])} })
	for _, l := range []float64{1.3011e-6, 1.452e-6, 1.6987e-6} {
		v, err := s.At("TE0", []float64{l})
		exact := film(l) // the same neff everywhere: V is constant
		if e := math.Abs(v.Neff.Value - exact.neff); err != nil || e > 1e-13 || e > v.Neff.Bound {
			t.Errorf("%g m: found %+v, %v, expected %.14f", l, v.Neff, err, exact.neff)
		}
		if e := math.Abs(v.GVD.Value - exact.gvd); e > 1e-4 || e > v.GVD.Bound {
			t.Errorf("%g m: found GVD %+v, expected %g", l, v.GVD, exact.gvd)
		}
	}
}

func TestErrors(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(9), thickness(25), {Parameter: "index_shift", Values: []float64{0}}}
	s := writeSlab(t, axes, 2)
	cases := map[string]struct {
		family string
		values []float64
		want   string
	}{
		"family":      {"TM0", []float64{1.4e-6, 0.5e-6, 0}, "family TM0, expected one of TE0, TE1"},
		"count":       {"TE0", []float64{1.4e-6}, "1 values, expected one for each of 3 axes"},
		"below":       {"TE0", []float64{1.2e-6, 0.5e-6, 0}, "wavelength: found 1.2 um, expected 1.3 um to 1.7 um"},
		"above":       {"TE0", []float64{1.4e-6, 1.5e-6, 0}, "thickness: found 1.5 um, expected 400 nm to 1 um"},
		"nan":         {"TE0", []float64{math.NaN(), 0.5e-6, 0}, "wavelength: found NaN"},
		"one value":   {"TE0", []float64{1.4e-6, 0.5e-6, 0.001}, "index_shift: found 0.001, expected 0 (the axis has this value only)"},
		"absent":      {"TE1", []float64{1.7e-6, 0.4e-6, 0}, "family TE1 has no value at wavelength=1.7 um, thickness=400 nm, index_shift=0: it is not guided there, or the point failed or was excluded (points.parquet says which)"},
		"absent near": {"TE1", []float64{1.69e-6, 0.41e-6, 0}, "family TE1 has no value at the neighbouring grid point"},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			_, err := s.At(c.family, c.values)
			if err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("found %v, expected %q", err, c.want)
			}
		})
	}
}

// Next to cut-off TE1 is interpolated from the side where it is guided, in
// every cell all of whose corners are.
func TestNearCutoff(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(41), thickness(61)}
	s := writeSlab(t, axes, 2)
	p := slabSweep(axes)
	inside := 0
	for i := range len(axes[0].Values) - 1 {
		for j := range len(axes[1].Values) - 1 {
			guided := true
			for c := range 4 {
				guided = guided && slabTE(1, at(p, axes, []float64{axes[0].Values[i+c%2], axes[1].Values[j+c/2]})).guided
			}
			values := []float64{(axes[0].Values[i] + axes[0].Values[i+1]) / 2, (axes[1].Values[j] + axes[1].Values[j+1]) / 2}
			v, err := s.At("TE1", values)
			if guided != (err == nil) {
				t.Fatalf("cell %d, %d: found %v, expected a value where all corners are guided (%v)", i, j, err, guided)
			}
			if e := math.Abs(v.Neff.Value - slabTE(1, at(p, axes, values)).neff); guided && !(e <= v.Neff.Bound) {
				t.Errorf("cell %d, %d: found an error of %g, bound %g", i, j, e, v.Neff.Bound)
			}
			if guided {
				inside++
			}
		}
	}
	if inside < 500 {
		t.Fatalf("found %d cells inside, expected a surface that is cut by the box", inside)
	}
}

// A Surfaces serves goroutines at once with the same answers.
func TestConcurrent(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(81), thickness(61), shifts(11)}
	s := writeSlab(t, axes, 1)
	s.batches.limit = 1 // every batch drops the others
	var wg sync.WaitGroup
	for g := range 4 {
		wg.Add(1)
		go func() {
			defer wg.Done()
			r := rand.New(rand.NewPCG(3, uint64(g)))
			for range 100 {
				values := anywhere(r, axes)
				v, err := s.At("TE0", values)
				if exact := slabTE(0, at(slabSweep(axes), axes, values)); err != nil || math.Abs(v.Neff.Value-exact.neff) > v.Neff.Bound {
					t.Errorf("%v: found %+v, %v, expected %g", values, v.Neff, err, exact.neff)
				}
			}
		}()
	}
	wg.Wait()
	if n := s.batches.order.Len(); n != 1 {
		t.Errorf("found %d batches kept, expected 1", n)
	}
}

func TestAtAllocatesNothing(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(21), thickness(16), shifts(3)}
	s := writeSlab(t, axes, 1)
	var v Value
	values := []float64{1.4001e-6, 0.7003e-6, 0.0012}
	ws := newWorkspace(s)
	if err := s.evaluate(&v, ws, 0, values); err != nil {
		t.Fatal(err)
	}
	if n := testing.AllocsPerRun(100, func() { _ = s.evaluate(&v, ws, 0, values) }); n > 0 {
		t.Errorf("found %g allocations a call, expected none", n)
	}
}

func BenchmarkAt(b *testing.B) {
	axes := []schema.AxisBlock{wavelengths(81), thickness(61), shifts(3)}
	s := writeSlab(b, axes, 1)
	r := rand.New(rand.NewPCG(1, 2))
	points := make([][]float64, 4096)
	for i := range points {
		points[i] = anywhere(r, axes)
	}
	var v Value
	b.ReportAllocs()
	b.ResetTimer()
	for i := range b.N {
		if err := s.AtTo(&v, "TE0", points[i%len(points)]); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.N)/b.Elapsed().Seconds(), "points/s")
}
