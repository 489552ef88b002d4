package scheduler_test

import (
	"errors"
	"fmt"
	"io"
	"math"
	"strings"
	"testing"
	"time"

	"betaloom/scheduler"
	"betaloom/schema/sweep"
	"betaloom/solvers"
)

// film is a sweep file; wavelength and materials go in.
const film = `format: 1
sweep: film
materials:
  film: FILM
  oxide: {named: fused-silica}
  spare: {named: fused-silica}
parameters:
  wavelength: WAVE
  height: {from: 0.3 um, to: 1.2 um, count: 10}
section:
  layers:
    - {material: oxide}
    - {name: core, material: film, thickness: height}
    - {material: oxide}
modes: 2
`

func parse(t *testing.T, material, wave string) *sweep.Sweep {
	t.Helper()
	src := strings.NewReplacer("FILM", material, "WAVE", wave).Replace(film)
	sw, err := sweep.Parse("film.yaml", []byte(src), func(string) (io.ReadCloser, error) { return nil, errors.New("no such file") })
	if err != nil {
		t.Fatal(err)
	}
	return sw
}

// Malitson (1965) measured fused silica from 0.21 um to 3.71 um; Tan (1998)
// confirmed the formula up to 6.7 um.
func TestPlan(t *testing.T) {
	cases := []struct {
		name, material, wave string
		found                string // of the one diagnostic
		warns                string
	}{
		{name: "inside", material: "{index: 2}", wave: "{from: 1.3 um, to: 1.7 um, count: 5}"},
		{name: "a fixed wavelength outside", material: "{index: 2}", wave: "8 um",
			found: "film.yaml:8:3: parameters.wavelength: found a wavelength of 8 um; expected wavelengths from 210 nm to 6.7 um, where material oxide is known"},
		{name: "an axis outside", material: "{index: 2}", wave: "{from: 7 um, to: 8 um, count: 3}",
			found: "film.yaml:8:3: parameters.wavelength: found wavelengths from 7 um to 8 um; expected wavelengths from 210 nm to 6.7 um"},
		{name: "an axis partly outside", material: "{index: 2}", wave: "{values: [1 um, 3 um, 7 um]}",
			warns: "1 of 3 values of wavelength are outside wavelengths from 210 nm to 6.7 um, where material oxide is known"},
		{name: "the edge of a range", material: "{index: 2}", wave: "6.7 um"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			p, err := scheduler.NewPlan("film.yaml", parse(t, c.material, c.wave))
			if c.found != "" {
				var d sweep.Diagnostics
				if !errors.As(err, &d) || len(d) != 1 || !strings.HasPrefix(d[0].String(), c.found) {
					t.Errorf("found %v, expected %q", err, c.found)
				}
				return
			}
			if err != nil {
				t.Fatal(err)
			}
			if got := strings.Join(p.Warnings, "\n"); !strings.HasPrefix(got, c.warns) || (got == "") != (c.warns == "") {
				t.Errorf("found the warnings %q, expected %q", got, c.warns)
			}
			if len(p.Reasons) == 0 || p.Grid.Points()%10 != 0 {
				t.Errorf("found %+v, expected reasons and a grid", p)
			}
		})
	}
}

// A frequency outside is told as a wavelength, since ranges are.
func TestPlanFrequency(t *testing.T) {
	sw := parse(t, "{index: 2}", "1.5 um")
	sw.Physics.Parameters[0].Name, sw.Physics.Parameters[0].Value = "frequency", 1e12
	var d sweep.Diagnostics
	if _, err := scheduler.NewPlan("film.yaml", sw); !errors.As(err, &d) || !strings.Contains(d[0].Found, "299.792458 um") {
		t.Errorf("found %v, expected the wavelength of 1 THz", err)
	}
}

func TestPlanScope(t *testing.T) {
	src := strings.NewReplacer("FILM", "{index: 2}", "WAVE", "1.5 um").Replace(film)
	src = src[:strings.Index(src, "section:")] + "section:\n  pipe: {circle: {diameter: height}, fill: oxide}\n"
	sw, err := sweep.Parse("film.yaml", []byte(src), nil)
	if err != nil {
		t.Fatal(err)
	}
	var scope *solvers.ScopeError
	if _, err := scheduler.NewPlan("film.yaml", sw); !errors.As(err, &scope) {
		t.Errorf("found %v, expected a section out of scope", err)
	}
}

func TestEstimate(t *testing.T) {
	p, err := scheduler.NewPlan("film.yaml", parse(t, "{index: 2}", "{from: 1.3 um, to: 1.7 um, count: 1000}"))
	if err != nil {
		t.Fatal(err)
	}
	one, err := p.Estimate(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	if one.PointsPerSecond <= 0 || one.ModesPerPoint < 1 || one.ModesPerPoint > 2 || one.Time <= 0 {
		t.Errorf("found %+v, expected one to two modes a point and a time", one)
	}
	if values := 10_000 * one.ModesPerPoint * 30; one.DiskBytes < int64(8*values) || math.IsInf(one.PointsPerSecond, 0) {
		t.Errorf("found %d bytes, expected at least those of thirty columns", one.DiskBytes)
	}
}

// TestEstimateOfStrips: tiles of strips are shared by as many workers as there are tiles and no more, and a point takes
// milliseconds at least and no seconds (measured: 10 to 100 ms; a hundred times either way for the machine).
func TestEstimateOfStrips(t *testing.T) {
	src := strings.NewReplacer("FILM", "{index: 2}", "WAVE", "{from: 1.5 um, to: 1.6 um, count: 130}").Replace(film)
	src = strings.Replace(src, "thickness: height", "thickness: height, fill: oxide, strips: [{centre: 0 um, width: 1 um}]", 1)
	sw, err := sweep.Parse("strip.yaml", []byte(src), nil)
	if err != nil {
		t.Fatal(err)
	}
	p, err := scheduler.NewPlan("strip.yaml", sw)
	if err != nil {
		t.Fatal(err)
	}
	one, err := p.Estimate(t.Context(), 1)
	if err != nil {
		t.Fatal(err)
	}
	if !(one.ModesPerPoint >= 1 && one.ModesPerPoint <= 2 && one.PointsPerSecond > 0.1 && one.PointsPerSecond < 10_000) {
		t.Errorf("found %+v, expected one to two modes and 0.1 ms to 10 s a point", one)
	}
	many, err := p.Estimate(t.Context(), 1_000_000)
	if err != nil {
		t.Fatal(err)
	}
	tiles := time.Duration(p.Grid.Tiles())
	if least := one.Time / (10 * tiles); tiles < 20 || many.Time < least || many.Time > one.Time/2 { // samples vary with what else runs
		t.Errorf("%v with a worker for each of %d tiles, %v with one for all", many.Time, tiles, one.Time)
	}
}

// TestPlanRefusesLongTables: a tile carries its tables, and a message of the
// queue holds 1 MiB (the default limit of NATS).
func TestPlanRefusesLongTables(t *testing.T) {
	var table strings.Builder
	table.WriteString("wavelength_um,n\n")
	for i := range 60_000 {
		fmt.Fprintf(&table, "%.5f,%.8f\n", 1+1e-5*float64(i), 2+1e-6*float64(i))
	}
	src := strings.NewReplacer("FILM", "{table: long.csv}", "WAVE", "1.5 um").Replace(film)
	sw, err := sweep.Parse("film.yaml", []byte(src), func(string) (io.ReadCloser, error) {
		return io.NopCloser(strings.NewReader(table.String())), nil
	})
	if err != nil {
		t.Fatal(err)
	}
	_, err = scheduler.NewPlan("film.yaml", sw)
	var d sweep.Diagnostics
	if !errors.As(err, &d) || len(d) != 1 || !strings.HasPrefix(d[0].String(), "film.yaml:4:3: materials.film: found a table of 60000 rows") {
		t.Errorf("found %v, expected a diagnostic of the long table", err)
	}
}
