package material

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"sync"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/jet"
)

func TestCompileRefuses(t *testing.T) {
	two := literal(2)
	metal := schema.Material{Conductivity: literal(1.5e7)}
	axes := func(x schema.Material) schema.Material {
		ok := schema.Material{Index: two}
		return schema.Material{Axes: &schema.Axes{X: x, Y: ok, Z: ok}}
	}
	table := func(l, n, k []float64) schema.Material {
		return schema.Material{Table: &schema.Table{File: "lab.csv", WavelengthM: l, N: n, K: k}}
	}
	cases := []struct {
		name     string
		material schema.Material
		says     string
	}{
		{"nothing", schema.Material{}, "0 of named, index, permittivity, sellmeier, table, axes, conductivity, expected exactly one"},
		{"two forms", schema.Material{Index: two, Named: "silicon"}, "2 of named"},
		{"unknown name", schema.Material{Named: "unobtainium"}, "named unobtainium, expected a built-in material"},
		{"half a name", schema.Material{Named: "lithium-niobate"}, "lithium-niobate-o, lithium-niobate-e?"},
		{"negative index", schema.Material{Index: literal(-1)}, "index -1, expected above 0"},
		{"infinite index", schema.Material{Index: literal(math.Inf(1))}, "number +Inf, expected a finite number"},
		{"zero permittivity", schema.Material{Permittivity: literal(0)}, "permittivity 0, expected above 0"},
		{"reference at absolute zero", schema.Material{Index: two, ReferenceTemperature: literal(0)}, "reference_temperature 0"},
		{"extinction with permittivity", schema.Material{Permittivity: two, Extinction: two}, "extinction with permittivity"},
		{"loss tangent with index", schema.Material{Index: two, LossTangent: two}, "loss_tangent with index"},
		{"not a number in sellmeier", schema.Material{Sellmeier: &schema.Sellmeier{Constant: *literal(math.NaN())}}, "number NaN"},
		{"axes in axes", axes(axes(schema.Material{Index: two})), "material film, axis x: found axes or conductivity"},
		{"metal in axes", axes(metal), "material film, axis x: found axes or conductivity"},
		{"bad axis", axes(schema.Material{Index: literal(-3)}), "material film, axis x: found index -3"},
		{"bad shift of axes", schema.Material{Axes: axes(schema.Material{Index: two}).Axes, AddIndex: literal(math.NaN())}, "number NaN"},
		{"one row", table([]float64{1e-6}, []float64{2}, nil), "table lab.csv: 1 rows, expected two or more"},
		{"columns of two lengths", table([]float64{1e-6, 2e-6}, []float64{2}, nil), "2 wavelengths, 1 n, 0 k"},
		{"k too short", table([]float64{1e-6, 2e-6}, []float64{2, 2}, []float64{0}), "2 wavelengths, 2 n, 1 k"},
		{"falling wavelengths", table([]float64{2e-6, 1e-6}, []float64{2, 2}, nil), "wavelength 1 um of row 2 after 2 um"},
		{"a wavelength twice", table([]float64{1e-6, 1e-6}, []float64{2, 2}, nil), "wavelengths that rise"},
		{"negative wavelength", table([]float64{-1e-6, 1e-6}, []float64{2, 2}, nil), "wavelength of row 1 of -1e-06"},
		{"zero n", table([]float64{1e-6, 2e-6}, []float64{2, 0}, nil), "n of row 2 of 0, expected above 0"},
		{"infinite k", table([]float64{1e-6, 2e-6}, []float64{2, 2}, []float64{0, math.Inf(1)}), "k of row 2 of +Inf"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			_, err := Compile("film", c.material)
			var input *solvers.InputError
			if !errors.As(err, &input) {
				t.Fatalf("error %v, want an InputError", err)
			}
			if !strings.Contains(err.Error(), c.says) || !strings.HasPrefix(err.Error(), "material film") {
				t.Errorf("%q does not say %q", err, c.says)
			}
		})
	}
}

func TestPermittivityRefuses(t *testing.T) {
	p := parameter("p")
	cases := []struct {
		name     string
		material schema.Material
		w, value float64
		says     string
	}{
		{"a metal", schema.Material{Conductivity: literal(1e7)}, 1e15, 0, "a dielectric; a metal can be a ground"},
		{"negative index", schema.Material{Index: p}, 1e15, -1.5, "of -1.5, expected above 0"},
		{"index not a number", schema.Material{Index: p}, 1e15, math.NaN(), "index NaN, expected a finite number"},
		{"negative permittivity", schema.Material{Permittivity: p}, 1e15, -2, "given as index and extinction"},
		{"shift below zero", schema.Material{Index: literal(1.5), AddIndex: p}, 1e15, -2, "index with its shifts -0.5"},
		{"at the pole", schema.Material{Sellmeier: &schema.Sellmeier{Constant: *literal(1), Terms: [][2]schema.Number{{*p, *literal(2)}}}},
			frequencyOf(1), 5, "permittivity at 1 um of -0.66"},
		{"no such parameter", schema.Material{Index: parameter("q")}, 1e15, 0, "no value of parameter q"},
		{"zero frequency", schema.Material{Index: literal(2)}, 0, 0, "angular frequency 0"},
		{"frequency not a number", schema.Material{Index: literal(2)}, math.NaN(), 0, "angular frequency NaN"},
		{"infinite frequency", schema.Material{Named: "vacuum"}, math.Inf(1), 0, "angular frequency +Inf"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			m := compiled(t, c.material)
			var dst [3]jet.Jet
			err := m.Permittivity(c.w, baseOf([]string{"p"}, []float64{c.value}), 1, &dst)
			var input *solvers.InputError
			if !errors.As(err, &input) {
				t.Fatalf("error %v, want an InputError", err)
			}
			if !strings.Contains(err.Error(), c.says) {
				t.Errorf("%q does not say %q", err, c.says)
			}
		})
	}
}

func TestRangeOfWhatHasNone(t *testing.T) {
	for _, m := range []schema.Material{{Index: literal(2)}, {Conductivity: literal(1e7)}, {Named: "vacuum"}} {
		if lo, hi := compiled(t, m).Range(); lo != 0 || !math.IsInf(hi, 1) {
			t.Errorf("%+v: range %g to %g, want 0 to +Inf", m, lo, hi)
		}
	}
}

// What depends on no parameter says so with nil; a dst that served another
// material serves the next, and its axes share no storage.
func TestStorageOfDst(t *testing.T) {
	var dst [3]jet.Jet
	tuned := compiled(t, schema.Material{Index: parameter("n")})
	fixed := compiled(t, schema.Material{Named: "fused-silica"})
	of := baseOf([]string{"n"}, []float64{2})
	w := frequencyOf(1.55)
	if err := tuned.Permittivity(w, of, 1, &dst); err != nil {
		t.Fatal(err)
	}
	dst[0].P[0], dst[0].WP[0] = 7, 7
	if dst[1].P[0] != 4 || dst[2].WP[0] != 0 {
		t.Errorf("axes share storage: %v", dst)
	}
	if err := fixed.Permittivity(w, of, 1, &dst); err != nil {
		t.Fatal(err)
	}
	for i := range dst {
		if dst[i].P != nil || dst[i].WP != nil || math.Abs(real(dst[i].V)-1.44402*1.44402) > 2e-5 {
			t.Errorf("axis %d: %+v", i, dst[i])
		}
	}
}

func TestManyGoroutines(t *testing.T) {
	m := compiled(t, schema.Material{Named: "fused-silica", AddIndex: parameter("a")})
	of := baseOf([]string{"a"}, []float64{0.01})
	want := permittivity(t, m, frequencyOf(1.55), of, 1)
	var wg sync.WaitGroup
	for range 4 {
		wg.Go(func() {
			for range 100 {
				var dst [3]jet.Jet
				if err := m.Permittivity(frequencyOf(1.55), of, 1, &dst); err != nil || dst[0].V != want[0].V {
					t.Errorf("%v, %v, want %v", dst[0].V, err, want[0].V)
					return
				}
			}
		})
	}
	wg.Wait()
}

// speed is what the benchmark and the test for allocations look at.
func speed(t testing.TB) map[string]func() {
	silica := schema.Sellmeier{Constant: *literal(1), Terms: [][2]schema.Number{
		{*literal(0.6961663), *literal(0.0684043)}, {*literal(0.4079426), *literal(0.1162414)}, {*literal(0.8974794), *literal(9.896161)},
	}}
	tuned := silica
	tuned.Terms = append([][2]schema.Number{{*parameter("b"), *literal(0.0684043)}}, silica.Terms[1:]...)
	lab := &schema.Table{File: "lab.csv"}
	for i := range 101 {
		lab.WavelengthM = append(lab.WavelengthM, 1e-6+1e-8*float64(i))
		lab.N = append(lab.N, 1.5-1e-3*float64(i))
	}
	run := func(m schema.Material) func() {
		c, dst := compiled(t, m), new([3]jet.Jet)
		of := baseOf([]string{"a", "b", "temperature"}, []float64{0.01, 0.7, 300})
		w := frequencyOf(1.55)
		return func() {
			if err := c.Permittivity(w, of, 3, dst); err != nil {
				t.Fatal(err)
			}
		}
	}
	return map[string]func(){
		"sellmeier":             run(schema.Material{Sellmeier: &silica}),
		"named with shifts":     run(schema.Material{Named: "fused-silica", AddIndex: parameter("a"), ThermoOptic: literal(1e-5)}),
		"sellmeier, parameters": run(schema.Material{Sellmeier: &tuned}),
		"table":                 run(schema.Material{Table: lab}),
		"index":                 run(schema.Material{Index: literal(1.5)}),
	}
}

func TestNoAllocation(t *testing.T) {
	for name, f := range speed(t) {
		t.Run(name, func(t *testing.T) {
			f()
			if n := testing.AllocsPerRun(100, f); n != 0 {
				t.Errorf("%v allocations, want none", n)
			}
		})
	}
}

func BenchmarkPermittivity(b *testing.B) {
	for name, f := range speed(b) {
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				f()
			}
		})
	}
}

func ExampleMaterial_Permittivity() {
	m, err := Compile("oxide", schema.Material{Named: "fused-silica"})
	if err != nil {
		fmt.Println(err)
		return
	}
	var eps [3]jet.Jet
	for _, um := range []float64{1.55, 8} {
		w := 2 * math.Pi * schema.LightSpeed / (um * 1e-6)
		if err := m.Permittivity(w, nil, 0, &eps); err != nil {
			fmt.Println(err)
			continue
		}
		fmt.Printf("n = %.5f\n", real(jet.Sqrt(eps[0]).V))
	}
	// Output:
	// n = 1.44402
	// material oxide: found wavelength 8 um, expected 0.21 um to 6.7 um (the range of fused-silica)
}
