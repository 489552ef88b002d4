package report

import (
	"fmt"
	"math"
	"slices"

	"betaloom/scheduler/surface"
	"betaloom/schema"
)

func linspace(lo, hi float64, n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = lo
		if n > 1 {
			out[i] = lo + (hi-lo)*float64(i)/float64(n-1)
		}
	}
	return out
}

func wavelengths(n int) schema.AxisBlock {
	return schema.AxisBlock{Parameter: "wavelength", Values: linspace(1.3e-6, 1.7e-6, n)}
}

func heights(n int) schema.AxisBlock {
	return schema.AxisBlock{Parameter: "height", Values: linspace(0.3e-6, 1.3e-6, n)}
}

func shifts(n int) schema.AxisBlock {
	return schema.AxisBlock{Parameter: "index_shift", Values: linspace(-0.01, 0.01, n)}
}

func temperatures(n int) schema.AxisBlock {
	return schema.AxisBlock{Parameter: "temperature", Values: linspace(280, 320, n)}
}

func metres() schema.Dimension { return schema.Dimension{Length: 1} }

// film is a stack of three layers whose parameters are those of the axes.
func film(axes []schema.AxisBlock) schema.Physics {
	p := schema.Physics{Materials: map[string]schema.Material{
		"film":  {Named: "silicon-nitride", AddIndex: &schema.Number{Parameter: "index_shift"}},
		"oxide": {Named: "fused-silica"},
		"gel":   {Index: &schema.Number{Value: 1.41}, ThermoOptic: &schema.Number{Value: -3e-4}},
	}, Accuracy: schema.Accuracy{Neff: 1e-6}}
	dims := map[string]schema.Dimension{"wavelength": metres(), "height": metres(), "temperature": {Temperature: 1}}
	fixed := map[string]float64{"wavelength": 1.55e-6, "height": 0.8e-6, "index_shift": 0, "temperature": 293.15}
	for _, name := range []string{"wavelength", "height", "index_shift", "temperature"} {
		q := schema.Parameter{Name: name, Kind: schema.Fixed, Value: fixed[name], Dimension: dims[name]}
		for _, a := range axes {
			if a.Parameter == name {
				q.Kind, q.Value = schema.Axis, 0
			}
		}
		p.Parameters = append(p.Parameters, q)
	}
	p.Parameters = append(p.Parameters, schema.Parameter{Name: "buffer", Kind: schema.Derived, Expr: "0.25 * height + 20 nm", Dimension: metres()})
	p.Section.Layers = &schema.Layers{Layers: []schema.Layer{
		{Material: "oxide"},
		{Name: "buffer", Material: "gel", Thickness: &schema.Number{Parameter: "buffer"}},
		{Name: "core", Material: "film", Thickness: &schema.Number{Parameter: "height"}},
		{Material: "oxide"},
	}}
	return p
}

// smooth is a stand-in for a mode: formulas that have a cut-off and a
// zero of the dispersion, which is all that the drawing needs.
func smooth(mode int, at map[string]float64) (neff, ng, gvd float64) {
	v := at["height"] / at["wavelength"] * (1 + 10*at["index_shift"])
	reach := v*3 - 0.7*float64(mode)
	if reach <= 0 {
		return math.NaN(), math.NaN(), math.NaN()
	}
	neff = 1.45 + 0.5*(1-math.Exp(-reach))
	ng = neff + 0.3*reach*math.Exp(-reach)
	gvd = 900*(reach-1.1)*math.Exp(-reach) - 300*(at["wavelength"]/1.5e-6-1) + (at["temperature"]-293.15)/10
	return neff, ng, gvd
}

// synthetic fills a page's data over a box by smooth, with TE0, TM0, ... as families.
func synthetic(axes []schema.AxisBlock, modes int) *Data {
	d := &Data{Name: "film-study", Physics: film(axes), Axes: axes, View: newBoxView(axes), States: map[string]int{}, Guided: map[int]int{},
		Equation: Equation{Name: "", Reasons: []string{"the section is open and varies along one axis: TE and TM, one ordinary differential eigenproblem"}},
		Cost:     []Fact{{"Time", "3.2 s"}, {"Workers", "4"}},
		Files:    []File{{"modes.parquet", "one row a point and mode", 1234567}}}
	slots := d.View.Slots()
	d.Count, d.Excluded = make([]float64, slots), make([]bool, slots)
	for i := range d.Count {
		d.Count[i] = math.NaN()
	}
	for m := range modes {
		d.Families = append(d.Families, newFamily(fmt.Sprintf("T%c%d", "EM"[m%2], m/2), "T"+string("EM"[m%2]), slots))
	}
	for d.Points < d.View.points {
		d.synthesise(d.Points)
		d.Points++
	}
	d.sort()
	d.Reached = []Reached{{Column: "neff_err", Asked: 1e-6, Worst: 3.2e-12, Median: 1e-13, Rows: d.ModeRows, At: 3},
		{Column: "gvd_err_ps2_per_km", Unit: "ps²/km", Worst: 2e-4, Median: 1e-6, Rows: d.ModeRows}}
	if err := d.findZeros(d.exactZeros); err != nil {
		panic(err)
	}
	return d
}

// exactZeros finds zeros of smooth along an axis by bisection.
func (d *Data) exactZeros(family string, axis int, values []float64) ([]surface.Crossing, error) {
	mode := slices.IndexFunc(d.Families, func(f *Family) bool { return f.Name == family })
	gvd := func(x float64) float64 {
		at := map[string]float64{"wavelength": 1.55e-6, "height": 0.8e-6, "temperature": 293.15}
		for i, v := range values {
			at[d.Axes[i].Parameter] = v
		}
		at[d.Axes[axis].Parameter] = x
		_, _, v := smooth(mode, at)
		return v
	}
	var out []surface.Crossing
	xs := d.View.Xs
	for i := 1; i < len(xs); i++ {
		lo, hi := xs[i-1], xs[i]
		if !(gvd(lo)*gvd(hi) < 0) {
			continue
		}
		for range 50 {
			if mid := (lo + hi) / 2; gvd(mid)*gvd(hi) > 0 {
				hi = mid
			} else {
				lo = mid
			}
		}
		out = append(out, surface.Crossing{Value: lo, Bound: 1e-6 * (xs[i] - xs[i-1])})
	}
	return out, nil
}

func (d *Data) synthesise(point int) {
	at := map[string]float64{"wavelength": 1.55e-6, "height": 0.8e-6, "temperature": 293.15}
	for i, v := range d.View.Values(point) {
		at[d.Axes[i].Parameter] = v
	}
	slot, guided := d.View.Slot(point), 0
	for m, f := range d.Families {
		neff, ng, gvd := smooth(m, at)
		if math.IsNaN(neff) {
			continue
		}
		guided++
		d.ModeRows++
		f.add(slot, [quantities]float64{neff, ng, gvd}, [quantities]float64{3e-12, 1e-10, 2e-4})
	}
	state := "solved"
	if guided == 0 {
		state = "no-mode"
	}
	d.States[state]++
	d.Guided[guided]++
	if slot >= 0 {
		d.Count[slot] = float64(guided)
	}
}
