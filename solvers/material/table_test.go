package material

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/solvers/jet"
)

// sampled is the table of a built-in material over 0.4 to 2.4 um: rows
// evenly spaced in wavelength, or denser to one end, changed by an error.
func sampled(name string, rows int, uneven float64, change func(n float64) float64) *schema.Table {
	e, _ := lookUp(name)
	d := e.formula.dispersion()
	s := &schema.Table{File: "lab.csv"}
	for i := range rows {
		um := 0.4 + 2*math.Pow(float64(i)/float64(rows-1), uneven)
		s.WavelengthM = append(s.WavelengthM, um*1e-6)
		s.N = append(s.N, change(math.Sqrt(d.at(1 / um / um)[0])))
	}
	return s
}

func untouched(n float64) float64 { return n }

// errorsOf are the largest errors of n and its three derivatives over the
// band, each relative to the largest value there, against the material's
// formula.
func errorsOf(t *testing.T, m *Material, name string) (e [4]float64) {
	t.Helper()
	exact := compiled(t, schema.Material{Named: name})
	var size [4]float64
	for i := range 1001 {
		um := 0.4 + 2*float64(i)/1000
		got, want := index(t, m, um), index(t, exact, um)
		g := [4]complex128{got.V, got.W, got.WW, got.WWW}
		for k, w := range [4]complex128{want.V, want.W, want.WW, want.WWW} {
			e[k] = max(e[k], math.Abs(real(g[k]-w)))
			size[k] = max(size[k], math.Abs(real(w)))
		}
	}
	for k := range e {
		e[k] /= size[k]
	}
	return e
}

// The bounds are twice or more what was measured when this was written: they
// keep the accuracy that the package states.
func TestTableOfFormula(t *testing.T) {
	noise := rand.New(rand.NewPCG(1, 2))
	noisy := func(n float64) float64 { return n + 1e-5*noise.NormFloat64() }
	fourDecimals := func(n float64) float64 { return math.Round(n*1e4) / 1e4 }
	cases := []struct {
		name   string
		table  *schema.Table
		bounds [4]float64
	}{
		{"4 rows", sampled("fused-silica", 4, 1, untouched), [4]float64{5e-4, 0.2, 0.6, 1}},
		{"10 rows", sampled("fused-silica", 10, 1, untouched), [4]float64{1e-5, 1e-3, 1e-2, 0.05}},
		{"41 rows", sampled("fused-silica", 41, 1, untouched), [4]float64{2e-8, 1e-5, 3e-5, 1e-4}},
		{"101 rows", sampled("fused-silica", 101, 1, untouched), [4]float64{2e-10, 2e-7, 1e-6, 5e-5}},
		{"101 uneven rows", sampled("fused-silica", 101, 3, untouched), [4]float64{2e-9, 2e-7, 1e-5, 5e-4}},
		{"1001 rows", sampled("fused-silica", 1001, 1, untouched), [4]float64{1e-14, 1e-9, 5e-7, 1e-4}},
		{"100000 rows", sampled("fused-silica", 100000, 1, untouched), [4]float64{2e-14, 1e-9, 5e-7, 1e-4}},
		{"noise 1e-5, 101 rows", sampled("fused-silica", 101, 1, noisy), [4]float64{2e-5, 0.02, 0.1, 0.3}},
		{"noise 1e-5, 10000 rows", sampled("fused-silica", 10000, 1, noisy), [4]float64{3e-6, 2e-3, 0.02, 0.1}},
		{"four decimals, 21 rows", sampled("fused-silica", 21, 1, fourDecimals), [4]float64{5e-5, 0.04, 0.2, 0.5}},
		{"four decimals, 10000 rows", sampled("fused-silica", 10000, 1, fourDecimals), [4]float64{3e-5, 0.02, 0.1, 0.2}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			m := compiled(t, schema.Material{Table: c.table})
			e := errorsOf(t, m, "fused-silica")
			t.Logf("errors of n .. n''': %.1e, residual %.1e", e, m.Residual().RMSN)
			for k, bound := range c.bounds {
				if !(e[k] <= bound) {
					t.Errorf("derivative %d: error %.1e, want at most %.1e", k, e[k], bound)
				}
			}
		})
	}
}

// Smoothing must not be interpolation: with noise of 1e-4 on 400 rows, the
// residual is the noise (its estimate is good to a few parts in a hundred)
// and the fit is several times closer to the truth than the rows are.
func TestTableSmoothsNoise(t *testing.T) {
	noise := rand.New(rand.NewPCG(3, 4))
	s := sampled("silicon-nitride", 400, 1, func(n float64) float64 { return n + 1e-4*noise.NormFloat64() })
	m := compiled(t, schema.Material{Table: s})
	if r := m.Residual(); r.RMSN < 0.9e-4 || r.RMSN > 1.1e-4 || r.MaxN < 2e-4 || r.MaxN > 5e-4 {
		t.Errorf("residual %+v, want the noise of 1e-4", r)
	}
	if e := errorsOf(t, m, "silicon-nitride"); !(e[0]*2.1 <= 5e-5) {
		t.Errorf("error of n %.1e, want well below the noise of 1e-4", e[0]*2.1)
	}
}

// The derivatives are those of the fit itself: against differences of the
// fit's own values, whose error (step^2 and rounding over the step to the
// order) allows the tolerances below.
func TestTableDerivativesAreTheFits(t *testing.T) {
	s := sampled("fused-silica", 60, 2, untouched)
	for _, l := range s.WavelengthM {
		s.K = append(s.K, 0.05*math.Exp(-math.Pow((l*1e6-1.2)/0.3, 2)))
	}
	m := compiled(t, schema.Material{Table: s})
	w, h := frequencyOf(1.3), 2e-3*frequencyOf(1.3)
	at := func(k float64) jet.Jet { return permittivity(t, m, w+k*h, nil, 0)[0] }
	j := at(0)
	difference := func(f func(jet.Jet) complex128) complex128 { // fourth order
		return (8*(f(at(1))-f(at(-1))) - (f(at(2)) - f(at(-2)))) / complex(12*h, 0)
	}
	cases := []struct {
		name      string
		got, want complex128
	}{
		{"W", j.W, difference(func(j jet.Jet) complex128 { return j.V })},
		{"WW", j.WW, difference(func(j jet.Jet) complex128 { return j.W })},
		{"WWW", j.WWW, difference(func(j jet.Jet) complex128 { return j.WW })},
	}
	for _, c := range cases {
		for i, g := range [2]float64{real(c.got), imag(c.got)} {
			want := [2]float64{real(c.want), imag(c.want)}[i]
			if math.Abs(g-want) > 1e-5*math.Abs(want) {
				t.Errorf("%s: %v, want %v", c.name, c.got, c.want)
			}
		}
	}
}

// n and k are fitted each for itself and come out as (n - jk)^2.
func TestTableWithLoss(t *testing.T) {
	s := sampled("fused-silica", 81, 1, untouched)
	k := func(um float64) float64 { return 0.02 + 0.01*math.Sin(3*um) }
	for _, l := range s.WavelengthM {
		s.K = append(s.K, k(l*1e6))
	}
	m := compiled(t, schema.Material{Table: s})
	exact := compiled(t, schema.Material{Named: "fused-silica"})
	for _, um := range []float64{0.4, 0.77, 1.55, 2.4} {
		n := complex(real(index(t, exact, um).V), -k(um))
		got := permittivity(t, m, frequencyOf(um), nil, 0)[0].V
		// the fit's error with 81 rows, as above
		if d := got - n*n; math.Hypot(real(d), imag(d)) > 1e-8 {
			t.Errorf("%g um: %v, want %v", um, got, n*n)
		}
	}
	if r := m.Residual(); !(r.MaxK > 0 && r.MaxK < 1e-8) {
		t.Errorf("residual of k %+v, want a small one", r)
	}
}

// A window between two absorbing stretches: the fit to k oscillates about
// zero there, and no row amplifies, so the material must not.
func TestTableDoesNotAmplify(t *testing.T) {
	s := sampled("fused-silica", 40, 1, untouched)
	for i := range s.N {
		s.K = append(s.K, 0)
		if i < 10 || i > 30 {
			s.K[i] = 0.3
		}
	}
	m := compiled(t, schema.Material{Table: s})
	dips := 0
	for i := range 1001 {
		um := 0.4 + 2*float64(i)/1000
		eps := permittivity(t, m, frequencyOf(um), nil, 0)[0]
		if imag(eps.V) > 0 {
			t.Fatalf("permittivity %v at %g um amplifies", eps.V, um)
		}
		if imag(eps.V) == 0 {
			dips++
		}
	}
	if dips == 0 {
		t.Error("the fit never dips: this table tests nothing")
	}
}

func TestTableEnds(t *testing.T) {
	m := compiled(t, schema.Material{Table: sampled("fused-silica", 41, 1, untouched)})
	if lo, hi := m.Range(); lo != 0.4e-6 || hi != 2.4*1e-6 {
		t.Errorf("range %g to %g m, want 0.4 to 2.4 um", lo, hi)
	}
	for _, um := range []float64{0.4, 2.4} {
		permittivity(t, m, frequencyOf(um), nil, 0)
	}
	for _, um := range []float64{0.3999, 2.4001} {
		refusal(t, m, frequencyOf(um), "material film", "wavelength "+micrometres(um*1e-6), "0.4 um to 2.4 um", "table lab.csv")
	}
}

// Shifts act on a table as on any other source.
func TestTableWithShift(t *testing.T) {
	m := compiled(t, schema.Material{Table: sampled("fused-silica", 41, 1, untouched), AddIndex: parameter("a")})
	got := permittivity(t, m, frequencyOf(1.55), baseOf([]string{"a"}, []float64{0.01}), 1)[0]
	// Malitson's index, from memory, and d(n + a)^2/da = 2 (n + a)
	if math.Abs(real(jet.Sqrt(got).V)-1.45402) > 5e-6 || math.Abs(real(got.P[0])-2*1.45402) > 1e-5 {
		t.Errorf("%v, %v", got.V, got.P)
	}
}

// Whatever the rows, a table that compiles gives finite numbers or an error,
// in little time.
func TestTableOfAnyRows(t *testing.T) {
	source := rand.New(rand.NewPCG(5, 6))
	compiled := 0
	for trial := range 300 {
		s := wild(source, 2+source.IntN(60), trial%10 == 0)
		m, err := Compile("film", schema.Material{Table: s})
		if err != nil {
			if !strings.Contains(err.Error(), "lab.csv") {
				t.Errorf("trial %d: %v", trial, err)
			}
			continue
		}
		compiled++
		lo, hi := m.Range()
		for i := range 50 {
			l := lo * math.Pow(hi/lo, float64(i)/49)
			var dst [3]jet.Jet
			if err := m.Permittivity(2*math.Pi*schema.LightSpeed/l, nil, 0, &dst); err != nil {
				continue // the fit to wild rows may fall below zero, and says so
			}
			sum := dst[0].V + dst[0].W + dst[0].WW + dst[0].WWW
			if math.IsNaN(real(sum)) || math.IsInf(real(sum), 0) || math.IsNaN(imag(sum)) || math.IsInf(imag(sum), 0) {
				t.Fatalf("trial %d: %+v at %g m from %+v", trial, dst[0], l, s)
			}
		}
	}
	if compiled < 200 {
		t.Errorf("%d of 300 tables compiled, want most", compiled)
	}
}

// wild is a table with gaps, clusters (of neighbouring floats, if asked for),
// steps and spikes.
func wild(source *rand.Rand, rows int, neighbours bool) *schema.Table {
	s := &schema.Table{File: "lab.csv"}
	l := 1e-6 * math.Pow(10, 2*source.Float64()-1)
	for range rows {
		s.WavelengthM = append(s.WavelengthM, l)
		s.N = append(s.N, 1+source.Float64())
		s.K = append(s.K, math.Pow(10, -20*source.Float64()))
		if neighbours && source.IntN(4) == 0 {
			l = math.Nextafter(l, 1)
		} else {
			l *= 1 + math.Pow(10, -14*source.Float64())
		}
	}
	return s
}

// A narrow line in a long table is resolved: a fit must not stop at the
// smooth background. The line is 0.5 % of the band wide.
func TestTableWithNarrowLine(t *testing.T) {
	line := func(um float64) float64 { return 0.1 * math.Exp(-math.Pow((um-1.4)/0.005, 2)) }
	s := sampled("fused-silica", 4000, 1, untouched)
	for _, l := range s.WavelengthM {
		s.K = append(s.K, line(l*1e6))
	}
	m := compiled(t, schema.Material{Table: s})
	for _, um := range []float64{1.39, 1.395, 1.4, 1.4041, 1.45} {
		n := jet.Sqrt(permittivity(t, m, frequencyOf(um), nil, 0)[0]).V
		if math.Abs(-imag(n)-line(um)) > 1e-6 { // 1e-5 of the line
			t.Errorf("k(%g um) = %v, want %v", um, -imag(n), line(um))
		}
	}
}
