package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"text/tabwriter"

	"betaloom/scheduler"
	"betaloom/scheduler/fieldmap"
	"betaloom/schema"
	"betaloom/schema/quantity"
	"betaloom/schema/store"
	"betaloom/solvers"
	"betaloom/solvers/choose"
)

type fieldsCommand struct {
	Sweep  string   `arg:"" help:"The sweep file."`
	Values []string `arg:"" optional:"" help:"A value for each axis, as name=value with its unit, and mode=N (0 where absent)."`
	Out    []string `short:"o" required:"" sep:"none" placeholder:"FILE" help:"Where to write: .svg or .png a picture, .csv the fields themselves. May be given more than once."`
	Of     string   `help:"What the picture shows: e, h (their size), ex, ..., hz (a component), s (axial power flow)." enum:"e,ex,ey,ez,h,hx,hy,hz,s" default:"e"`
	Points int      `help:"Places along the longer side of the window." default:"201"`
	Window string   `help:"From left to right and bottom to top, rather than the cores and what the mode needs around them." placeholder:"X,X,Y,Y"`
	JSON   bool     `help:"Write JSON."`
}

// Help shows the command by example.
func (fieldsCommand) Help() string {
	return `Examples:

  betaloom fields strip.yaml width=0.5um wavelength=1.55um -o te00.svg
  betaloom fields strip.yaml width=0.5um wavelength=1.55um mode=1 --of ey -o tm00.png -o tm00.csv
  betaloom fields strip.yaml width=0.5um wavelength=1.55um --window=-1um,1um,-0.5um,0.8um -o wide.svg

The mode is solved anew, with the numbers a run gives its modes: 0 is the highest
neff. Axes of one value may be left out; fixed parameters may be given another value. Fields are scaled
to 1 W of axial power, and where the transverse E is largest its larger component is real
and positive. Along x and y a component's real part is drawn, along z its imaginary part: the other
is zero without loss.`
}

// modeView is the mode as JSON shows it; what has no meaning is null.
type modeView struct {
	Mode        int      `json:"mode"`
	GuidedCount int      `json:"guided_count"`
	Family      string   `json:"family"`
	ModeType    string   `json:"mode_type"`
	Symmetry    string   `json:"symmetry"`
	WavelengthM float64  `json:"wavelength_m"`
	FrequencyHz float64  `json:"frequency_hz"`
	Neff        float64  `json:"neff"`
	NeffErr     *float64 `json:"neff_err"`
	KappaEff    *float64 `json:"kappa_eff"`
	Ng          *float64 `json:"ng"`
	NgErr       *float64 `json:"ng_err"`
	GVD         *float64 `json:"gvd_ps2_per_km"`
	GVDErr      *float64 `json:"gvd_err_ps2_per_km"`
	ExShare     *float64 `json:"ex_share"`
	Aeff        *float64 `json:"aeff_m2"`
	Weff        *float64 `json:"weff_m"`
	Files       []string `json:"files"`
}

// Run solves the point and writes what was asked for.
func (c *fieldsCommand) Run(con *console) error {
	if err := c.check(); err != nil {
		return err
	}
	s, err := loadSweep(c.Sweep)
	if err != nil {
		return err
	}
	if _, err := scheduler.NewPlan(c.Sweep, s); err != nil {
		return err
	}
	at, err := spotOf(s, c.Values)
	if err != nil {
		return err
	}
	problem, _, err := choose.New(&at.physics)
	if err != nil {
		return err
	}
	fielder, ok := problem.(solvers.Fielder)
	if !ok {
		return usage("fields: found a section whose solver has no fields to draw, expected layers")
	}
	o, err := c.options()
	if err != nil {
		return err
	}
	f, err := fielder.Fields(con.ctx, at.q, at.mode, o)
	if err != nil {
		return err
	}
	for _, name := range c.Out {
		if err := c.write(name, f, s.Name, at); err != nil {
			return err
		}
	}
	return c.summary(con, f, at)
}

// check sees that every file has an ending that says what to write.
func (c *fieldsCommand) check() error {
	for _, name := range c.Out {
		if e := ending(name); e != "csv" && !slices.Contains(fieldmap.Formats(), e) {
			return usage("fields: found %s, expected a file that ends in .csv, .%s", name, strings.Join(fieldmap.Formats(), ", ."))
		}
	}
	return nil
}

func ending(name string) string {
	return strings.ToLower(strings.TrimPrefix(filepath.Ext(name), "."))
}

// options reads where the field is sampled.
func (c *fieldsCommand) options() (o solvers.FieldOptions, err error) {
	o.Points = c.Points
	if c.Window != "" {
		var v [4]float64
		parts := strings.Split(c.Window, ",")
		if len(parts) != len(v) {
			return o, usage("fields: --window: found %q, expected four lengths such as -1um,1um,-0.5um,0.8um", c.Window)
		}
		for i, text := range parts {
			d := schema.Dimension{}
			if v[i], d, err = quantity.Parse(text); err != nil {
				return o, usage("fields: --window: %w", err)
			}
			if d != (schema.Dimension{Length: 1}) {
				return o, usage("fields: --window: found %s, expected %s", quantity.Describe(d), quantity.Describe(schema.Dimension{Length: 1}))
			}
		}
		o.Window = &solvers.Window{Left: v[0], Right: v[1], Bottom: v[2], Top: v[3]}
	}
	if err := o.Validate(); err != nil || c.Points == 0 {
		return o, usage("fields: --points and --window: found %d points and window %q, expected 2 to %d points and a window with a width and a height", c.Points, c.Window, solvers.MaxFieldPoints)
	}
	return o, nil
}

// write makes one file.
func (c *fieldsCommand) write(name string, f *solvers.Field, sweepName string, at *spot) error {
	var b bytes.Buffer
	var err error
	if ending(name) == "csv" {
		err = fieldmap.WriteTable(&b, f)
	} else {
		err = fieldmap.Draw(&b, f, fieldmap.Options{Of: c.Of, Format: ending(name), Title: titleOf(f, at), Notes: notesOf(sweepName, at)})
	}
	if err != nil {
		return err
	}
	return store.WriteFile(name, b.Bytes())
}

// titleOf names the mode with its index, the bound and the wavelength.
func titleOf(f *solvers.Field, at *spot) string {
	m := &f.Mode
	const most = 10 // decimals
	decimals := most
	if m.NeffErr > 0 {
		decimals = min(max(-int(math.Floor(math.Log10(m.NeffErr))), 0), most)
	}
	return fmt.Sprintf("%s,  neff = %.*f ± %.1g,  λ = %s", m.Family, decimals, m.Neff, m.NeffErr, plain(at.wavelength(), schema.Dimension{Length: 1}))
}

// notesOf lists the point's parameters but the wavelength.
func notesOf(name string, at *spot) string {
	parts := []string{name}
	for i, p := range at.physics.Parameters {
		if p.Name != schema.Wavelength {
			parts = append(parts, p.Name+" = "+plain(at.values[i], p.Dimension))
		}
	}
	return strings.Join(parts, ", ")
}

// plain writes a value for a picture: no more than six digits where it has many.
func plain(v float64, d schema.Dimension) string {
	number, unit, _ := strings.Cut(quantity.Format(v, d), " ")
	if len(number) > 8 {
		if x, err := strconv.ParseFloat(number, 64); err == nil {
			number = strconv.FormatFloat(x, 'g', 6, 64)
		}
	}
	return strings.TrimSpace(number + " " + strings.Replace(unit, "um", "µm", 1))
}

// summary says what was solved.
func (c *fieldsCommand) summary(con *console, f *solvers.Field, at *spot) error {
	v := newModeView(f, at, c.Out)
	if c.JSON {
		e := json.NewEncoder(con.out)
		e.SetIndent("", "  ")
		return e.Encode(v)
	}
	w := tabwriter.NewWriter(con.out, 0, 0, 2, ' ', 0)
	fmt.Fprintf(w, "mode\t%d of %d\t%s %s %s\n", v.Mode, v.GuidedCount, v.Family, v.ModeType, v.Symmetry)
	fmt.Fprintf(w, "wavelength\t%s\n", quantity.Format(v.WavelengthM, schema.Dimension{Length: 1}))
	fmt.Fprintln(w, "column\tvalue\tbound")
	for _, r := range []struct {
		name         string
		value, bound *float64
	}{
		{"neff", &v.Neff, v.NeffErr}, {"kappa_eff", v.KappaEff, nil}, {"ng", v.Ng, v.NgErr}, {"gvd_ps2_per_km", v.GVD, v.GVDErr},
		{"ex_share", v.ExShare, nil}, {"aeff_m2", v.Aeff, nil}, {"weff_m", v.Weff, nil},
	} {
		switch {
		case r.value == nil:
		case r.bound == nil:
			fmt.Fprintf(w, "%s\t%.6g\n", r.name, *r.value)
		default:
			fmt.Fprintf(w, "%s\t%s\t%.2g\n", r.name, digits(&bounded{*r.value, r.bound}), *r.bound)
		}
	}
	for _, name := range v.Files {
		fmt.Fprintf(w, "wrote\t%s\n", name)
	}
	return w.Flush()
}

func newModeView(f *solvers.Field, at *spot, files []string) modeView {
	m := &f.Mode
	number := func(v float64) *float64 {
		if math.IsNaN(v) {
			return nil
		}
		return &v
	}
	const ps2 = 1e27 // s^2/m in ps^2/km
	return modeView{
		Mode: at.mode, GuidedCount: f.Count.N, Family: m.Family, ModeType: m.Type, Symmetry: m.Symmetry,
		WavelengthM: at.wavelength(), FrequencyHz: at.q[0] / (2 * math.Pi),
		Neff: m.Neff, NeffErr: number(m.NeffErr), KappaEff: number(m.Kappa), Ng: number(m.Ng), NgErr: number(m.NgErr),
		GVD: number(ps2 * m.GVD), GVDErr: number(ps2 * m.GVDErr),
		ExShare: number(m.ExShare), Aeff: number(m.Aeff), Weff: number(m.Weff), Files: files,
	}
}
