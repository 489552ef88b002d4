package main

import (
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"path/filepath"
	"strings"
	"text/tabwriter"

	"betaloom/scheduler"
	"betaloom/scheduler/collate"
	"betaloom/scheduler/surface"
	"betaloom/schema"
	"betaloom/schema/quantity"
)

type atCommand struct {
	Dir    string   `arg:"" help:"The run's folder."`
	Values []string `arg:"" optional:"" help:"A value for each axis, as name=value with its unit."`
	Family string   `help:"Only this family."`
	JSON   bool     `help:"Write JSON."`
}

// Help shows the command by example.
func (atCommand) Help() string {
	return `Examples:

  betaloom at runs/nitride-film height=0.83um wavelength=1.5481um index_shift=0.004
  betaloom at runs/nitride-film height=0.83um wavelength=1.5481um index_shift=0 --family TE0 --json

Each value comes with a bound on its error, that of the solved points and
that of the interpolation between them. Axes of one value may be left out.`
}

// answer is a family at the point, as JSON shows it: null where missing.
type answer struct {
	Family      string              `json:"family"`
	WavelengthM float64             `json:"wavelength_m"`
	FrequencyHz float64             `json:"frequency_hz"`
	Values      map[string]*bounded `json:"values"`
}

type bounded struct {
	Value float64  `json:"value"`
	Bound *float64 `json:"bound"`
}

// Run evaluates the surfaces of a run.
func (c *atCommand) Run(con *console) error {
	g, err := scheduler.ReadGrid(c.Dir)
	if err != nil {
		return folderError(c.Dir, err)
	}
	if !g.IsBox() {
		return usage("at: the points of %s come from a file, so there is no surface between them; betaloom table shows what was solved", c.Dir)
	}
	s, err := surface.Open(filepath.Join(c.Dir, collate.SurfacesFile))
	if err != nil {
		return folderError(c.Dir, err)
	}
	defer s.Close()
	point, err := parsePoint(g.Physics(), s.Axes(), c.Values)
	if err != nil {
		return err
	}
	families := s.Families()
	if c.Family != "" {
		families = []string{c.Family}
	}
	answers, absent, err := evaluate(s, families, point)
	if err != nil {
		return err
	}
	if len(families) == 0 {
		return &endError{exitUnsolved, fmt.Sprintf("at: no point of %s has a guided mode; betaloom table %s --points says why", c.Dir, c.Dir)}
	}
	if len(answers) == 0 {
		return &endError{exitUnsolved, "at: " + strings.Join(absent, "\nat: ")}
	}
	if c.JSON {
		e := json.NewEncoder(con.out)
		e.SetIndent("", "  ")
		return e.Encode(answers)
	}
	for _, a := range absent {
		fmt.Fprintln(con.err, a)
	}
	return writeAnswers(con, answers, columnsOf(s))
}

// evaluate asks each family; those not guided at the point are told apart
// from a point outside the box.
func evaluate(s *surface.Surfaces, families []string, point []float64) (answers []answer, absent []string, err error) {
	for _, f := range families {
		v, err := s.At(f, point)
		var gone *surface.AbsentError
		switch {
		case errors.As(err, &gone):
			absent = append(absent, gone.Error())
		case err != nil:
			return nil, nil, &usageError{err}
		default:
			answers = append(answers, newAnswer(s, f, v))
		}
	}
	return answers, absent, nil
}

func newAnswer(s *surface.Surfaces, family string, v surface.Value) answer {
	a := answer{Family: family, WavelengthM: v.WavelengthM, FrequencyHz: v.FrequencyHz, Values: map[string]*bounded{}}
	names := columnsOf(s)
	for i, b := range append([]surface.Bounded{v.Neff, v.Kappa, v.Ng, v.GVD, v.D, v.Beta3}, append(v.DNeff, v.DNg...)...) {
		a.Values[names[i]] = nil
		if !math.IsNaN(b.Value) {
			a.Values[names[i]] = &bounded{Value: b.Value}
			if !math.IsNaN(b.Bound) {
				a.Values[names[i]].Bound = &b.Bound
			}
		}
	}
	return a
}

// columnsOf names what newAnswer gives, in its order.
func columnsOf(s *surface.Surfaces) []string {
	names := []string{"neff", "kappa_eff", "ng", "gvd_ps2_per_km", "d_ps_per_nm_km", "beta3_ps3_per_km"}
	var ng []string
	for _, m := range s.Sensitivities() {
		names, ng = append(names, m.Neff), append(ng, m.Ng)
	}
	return append(names, ng...)
}

func writeAnswers(con *console, answers []answer, names []string) error {
	w := tabwriter.NewWriter(con.out, 0, 0, 2, ' ', 0)
	fmt.Fprintln(w, "family\tcolumn\tvalue\tbound")
	for _, a := range answers {
		for _, name := range names {
			b := a.Values[name]
			if b == nil {
				continue
			}
			bound := "unknown"
			if b.Bound != nil {
				bound = fmt.Sprintf("%.2g", *b.Bound)
			}
			fmt.Fprintf(w, "%s\t%s\t%s\t%s\n", a.Family, name, digits(b), bound)
		}
	}
	return w.Flush()
}

// digits writes a value to the digit that its bound leaves certain, and one
// more.
func digits(b *bounded) string {
	if b.Bound == nil || *b.Bound <= 0 || b.Value == 0 {
		return fmt.Sprintf("%.6g", b.Value)
	}
	n := 2 + int(math.Floor(math.Log10(math.Abs(b.Value)))-math.Floor(math.Log10(*b.Bound)))
	return fmt.Sprintf("%.*g", max(1, min(n, 16)), b.Value)
}

// parsePoint reads name=value arguments into the order of the surfaces' axes.
func parsePoint(p *schema.Physics, axes []schema.AxisBlock, args []string) ([]float64, error) {
	given := map[string]float64{}
	for _, arg := range args {
		name, v, err := parseValue("at", p, arg)
		if err != nil {
			return nil, err
		}
		if _, twice := given[name]; twice {
			return nil, usage("at: found %s twice, expected one value", name)
		}
		given[name] = v
	}
	var point []float64
	for _, a := range axes {
		v, ok := given[a.Parameter]
		if !ok && len(a.Values) > 1 {
			return nil, usage("at: found no value for axis %s, expected %s=VALUE (%s)", a.Parameter, a.Parameter, axisText(p, a))
		}
		if !ok {
			v = a.Values[0]
		}
		delete(given, a.Parameter)
		point = append(point, v)
	}
	for name := range given {
		return nil, usage("at: found a value for %s, which is no axis of the sweep; the axes are %s", name, axisNames(axes))
	}
	return point, nil
}

// parseValue reads one name=value argument of a command.
func parseValue(command string, p *schema.Physics, arg string) (string, float64, error) {
	name, text, ok := strings.Cut(arg, "=")
	if !ok {
		return "", 0, usage("%s: found %q, expected name=value such as width=1.73um", command, arg)
	}
	q, ok := p.Parameter(name)
	if !ok {
		return "", 0, usage("%s: found the unknown parameter %s", command, name)
	}
	v, d, err := quantity.Parse(text)
	if err != nil {
		return "", 0, usage("%s: %s: %w", command, name, err)
	}
	if d != q.Dimension {
		return "", 0, usage("%s: %s: found %s, expected %s", command, name, quantity.Describe(d), quantity.Describe(q.Dimension))
	}
	return name, v, nil
}

func axisText(p *schema.Physics, a schema.AxisBlock) string {
	q, _ := p.Parameter(a.Parameter)
	lo, hi := a.Values[0], a.Values[0]
	for _, v := range a.Values {
		lo, hi = min(lo, v), max(hi, v)
	}
	return quantity.Format(lo, q.Dimension) + " to " + quantity.Format(hi, q.Dimension)
}

func axisNames(axes []schema.AxisBlock) string {
	var names []string
	for _, a := range axes {
		names = append(names, a.Parameter)
	}
	return strings.Join(names, ", ")
}
