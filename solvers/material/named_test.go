package material

import (
	"errors"
	"math"
	"math/big"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/jet"
)

// fact is an index known at a wavelength from elsewhere than the formula.
type fact struct {
	um, n, tolerance float64
	source           string
}

const memory = "from memory: "

// secondFacts has one fact or more for each built-in material. Tolerances
// are half the last digit given, or wider where samples are known to differ.
func secondFacts() map[string][]fact {
	const d, sodium = 0.5875618, 0.5892938 // helium d and sodium D lines
	handbook := memory + "handbook value at the sodium line"
	return map[string][]fact{
		"vacuum":             {{1, 1, 0, "definition"}},
		"air":                {{0.6328, 1.0002765, 1e-7, memory + "refractivity 2.765e-4 of dry air at 15 degC, helium-neon line"}},
		"fused-silica":       {{1.55, 1.44402, 5e-6, memory + "Malitson 1965"}, {d, 1.45846, 5e-6, memory + "nd of fused silica"}},
		"germania":           {{d, 1.608, 6e-4, memory + "nd of germanium dioxide glass"}},
		"arsenic-trisulfide": {{1.55, 2.437, 2e-3, memory + "2.44 in the telecommunication band"}},
		// relative to air 1.33299; the formula is relative to vacuum
		"water":               {{sodium, 1.33299 * 1.000277, 2e-5, memory + "water at 20 degC, sodium line, times the index of air"}},
		"acrylic":             {{d, 1.491, 1e-3, memory + "nd of PMMA"}},
		"polystyrene":         {{d, 1.592, 1e-3, memory + "nd of polystyrene"}},
		"polycarbonate":       {{d, 1.585, 1e-3, memory + "nd of polycarbonate"}},
		"silicon":             {{1.55, 3.4777, 5e-5, memory + "silicon at 26 degC"}},
		"silicon-li":          {{1.55, 3.4757, 1e-4, memory + "Li 1980, 293 K"}},
		"germanium":           {{10.6, 4.003, 1e-3, memory + "germanium at the carbon dioxide laser line"}},
		"gallium-arsenide":    {{10.6, 3.27, 5e-3, memory + "gallium arsenide at the carbon dioxide laser line"}},
		"indium-phosphide":    {{1.55, 3.167, 5e-3, memory + "indium phosphide"}},
		"diamond":             {{sodium, 2.417, 5e-4, handbook}},
		"zinc-selenide":       {{10.6, 2.4028, 1e-4, memory + "zinc selenide at the carbon dioxide laser line"}},
		"zinc-sulfide":        {{10.6, 2.192, 1e-3, memory + "zinc sulfide at the carbon dioxide laser line"}, {sodium, 2.368, 2e-3, handbook}},
		"silicon-nitride":     {{1.55, 1.9963, 5e-5, memory + "Luke et al. 2015"}},
		"aluminium-nitride-o": {{1.55, 2.12, 5e-3, memory + "aluminium nitride"}},
		"aluminium-nitride-e": {{1.55, 2.16, 5e-3, memory + "aluminium nitride"}},
		// 5.35 is the high-frequency permittivity the same authors state; the formula
		// reaches it between the ultraviolet and the lattice terms, within 2 %
		"gallium-nitride-o":             {{1.55, math.Sqrt(5.35), 0.02, memory + "high-frequency permittivity 5.35"}},
		"sapphire-o":                    {{sodium, 1.768, 1e-3, handbook}},
		"sapphire-e":                    {{sodium, 1.760, 1e-3, handbook}},
		"titanium-dioxide-o":            {{sodium, 2.613, 1e-3, handbook}},
		"titanium-dioxide-e":            {{sodium, 2.909, 1e-3, handbook}},
		"quartz-o":                      {{sodium, 1.5442, 1e-4, handbook}},
		"quartz-e":                      {{sodium, 1.5533, 1e-4, handbook}},
		"magnesium-oxide":               {{sodium, 1.736, 2e-3, handbook}},
		"cubic-zirconia":                {{d, 2.158, 1e-3, memory + "nd of cubic zirconia with yttria"}},
		"yttrium-aluminium-garnet":      {{sodium, 1.833, 1e-3, handbook}},
		"calcium-fluoride":              {{d, 1.43385, 1e-5, memory + "nd of calcium fluoride"}},
		"barium-fluoride":               {{d, 1.47448, 2e-5, memory + "nd of barium fluoride"}},
		"lithium-fluoride":              {{d, 1.3921, 2e-4, memory + "nd of lithium fluoride"}},
		"magnesium-fluoride-o":          {{sodium, 1.378, 5e-4, handbook}},
		"magnesium-fluoride-e":          {{sodium, 1.390, 6e-4, handbook}},
		"lithium-niobate-o":             {{1.55, 2.2111, 5e-5, memory + "Zelmon et al. 1997"}},
		"lithium-niobate-e":             {{1.55, 2.1376, 5e-5, memory + "Zelmon et al. 1997"}},
		"magnesium-lithium-niobate-o":   {{1.064, 2.229, 3e-3, memory + "doped niobate at the neodymium laser line"}},
		"magnesium-lithium-niobate-e":   {{1.064, 2.149, 3e-3, memory + "doped niobate at the neodymium laser line"}},
		"potassium-titanyl-phosphate-x": {{1.064, 1.7377, 5e-4, memory + "flux-grown crystal at the neodymium laser line"}},
		"potassium-titanyl-phosphate-y": {{1.064, 1.7453, 5e-4, memory + "flux-grown crystal at the neodymium laser line"}},
		"potassium-titanyl-phosphate-z": {{1.064, 1.8297, 5e-4, memory + "flux-grown crystal at the neodymium laser line"}},
	}
}

// glassCodes are the optical glasses by their nd and Abbe number, from
// memory; the international code in the source is their first digits.
func glassCodes() map[string][2]float64 {
	return map[string][2]float64{
		"borosilicate-crown": {1.51680, 64.17}, "crown": {1.52249, 59.48}, "barium-crown": {1.57250, 57.55},
		"barium-flint": {1.67003, 47.11}, "flint": {1.62004, 36.37}, "dense-flint-673": {1.67271, 32.25},
		"dense-flint-728": {1.72825, 28.41}, "dense-flint-785": {1.78472, 25.76}, "dense-flint-805": {1.80518, 25.43},
		"dense-flint-847": {1.84666, 23.78}, "lanthanum-dense-flint": {1.85025, 32.17},
	}
}

func TestSecondFacts(t *testing.T) {
	facts, codes := secondFacts(), glassCodes()
	for _, l := range Named() {
		t.Run(l.Name, func(t *testing.T) {
			m := compiled(t, schema.Material{Named: l.Name})
			n := func(um float64) float64 { return real(index(t, m, um).V) }
			if code, ok := codes[l.Name]; ok {
				// to the last digit of the catalogues
				abbe := (n(0.5875618) - 1) / (n(0.4861327) - n(0.6562725))
				if math.Abs(n(0.5875618)-code[0]) > 6e-6 || math.Abs(abbe-code[1]) > 6e-3 {
					t.Errorf("nd %.5f, Abbe number %.2f, want %v", n(0.5875618), abbe, code)
				}
				return
			}
			if len(facts[l.Name]) == 0 {
				t.Fatal("no second fact")
			}
			for _, f := range facts[l.Name] {
				if got := n(f.um); !(math.Abs(got-f.n) <= f.tolerance) {
					t.Errorf("n(%g um) = %.6f, want %g within %g (%s)", f.um, got, f.n, f.tolerance, f.source)
				}
			}
		})
	}
}

// Air by another route: the textbook's 1.000293 holds at 0 degC (from
// memory), and refractivity goes like density.
func TestAirAgreesWithTheTextbookAtFreezing(t *testing.T) {
	n := real(index(t, compiled(t, schema.Material{Named: "air"}), 0.5893).V)
	if got := (n - 1) * 288.15 / 273.15; math.Abs(got-2.93e-4) > 1e-6 {
		t.Errorf("refractivity at 0 degC %g, want 2.93e-4", got)
	}
}

// The materials that the project promises by name.
func TestPromisedNamesAreListed(t *testing.T) {
	promised := []string{
		"fused-silica", "silicon-nitride", "silicon", "silicon-li", "lithium-niobate-o", "lithium-niobate-e",
		"sapphire-o", "sapphire-e", "germanium", "gallium-arsenide", "indium-phosphide", "aluminium-nitride-o",
		"aluminium-nitride-e", "diamond", "arsenic-trisulfide", "calcium-fluoride", "magnesium-fluoride-o",
		"magnesium-fluoride-e", "germania", "air", "vacuum",
	}
	listed := map[string]Listing{}
	for _, l := range Named() {
		if _, twice := listed[l.Name]; twice {
			t.Errorf("%s is listed twice", l.Name)
		}
		listed[l.Name] = l
		if l.Source == "" || l.Formula == "" || !(l.RangeM[1] > l.RangeM[0]) {
			t.Errorf("%s lacks its source, formula or range: %+v", l.Name, l)
		}
	}
	for _, name := range promised {
		if _, ok := listed[name]; !ok {
			t.Errorf("%s is not listed", name)
		}
	}
}

func TestFormulaText(t *testing.T) {
	want := map[string]string{
		"silicon-li":         "n^2 = 11.651722 + 1.030444 L^-2 - 0.000788 L^-4",
		"air":                "n = 1 + 0.05792105/(238.0185 - 1/L^2) + 0.00167917/(57.362 - 1/L^2)",
		"titanium-dioxide-o": "n^2 = 5.913 + 0.2441/(L^2 - 0.0803)",
		"silicon-nitride":    "n^2 = 1 + 3.0249 L^2/(L^2 - 0.1353406^2) + 40314 L^2/(L^2 - 1239.842^2)",
		"polystyrene":        "n^2 = 1 + 1.4435 L^2/(L^2 - 0.020216)",
	}
	seen := 0
	for _, l := range Named() {
		if text, ok := want[l.Name]; ok {
			seen++
			if l.Formula != text {
				t.Errorf("%s: %s, want %s", l.Name, l.Formula, text)
			}
		}
	}
	if seen != len(want) {
		t.Errorf("%d of %d materials listed", seen, len(want))
	}
}

// Rounding only: 1e-12 allows for the loss near a pole, where L^2 - c^2
// cancels three digits.
func TestNamedDerivativesAreExact(t *testing.T) {
	for _, e := range catalogue() {
		t.Run(e.name, func(t *testing.T) {
			m := compiled(t, schema.Material{Named: e.name})
			lo, hi := max(e.rangeUm[0], 0.1), min(e.rangeUm[1], 100)
			for _, um := range []float64{lo * 1.0001, math.Sqrt(lo * hi), hi * 0.9999} {
				w := frequencyOf(um)
				exact := func(w *big.Float, _ []*big.Float) big2 { return bigFormula(e.formula, w) }
				for _, got := range permittivity(t, m, w, nil, 3) {
					compareExact(t, got, exact, w, nil, 1e-12)
				}
			}
		})
	}
}

func TestOutsideTheRange(t *testing.T) {
	for _, e := range catalogue() {
		if e.name == "vacuum" {
			continue
		}
		t.Run(e.name, func(t *testing.T) {
			m := compiled(t, schema.Material{Named: e.name})
			for _, um := range []float64{e.rangeUm[0] * 0.999, e.rangeUm[1] * 1.001} {
				refusal(t, m, frequencyOf(um), "material film", e.name, micrometres(e.rangeUm[0]/metre), micrometres(e.rangeUm[1]/metre))
			}
			for _, um := range e.rangeUm { // its ends belong to it
				permittivity(t, m, frequencyOf(um), nil, 0)
			}
		})
	}
}

// refusal asks for a permittivity that must be an InputError which says all
// the words.
func refusal(t *testing.T, m *Material, w float64, words ...string) {
	t.Helper()
	err := m.Permittivity(w, nil, 0, new([3]jet.Jet))
	var input *solvers.InputError
	if !errors.As(err, &input) {
		t.Fatalf("error %v, want an InputError", err)
	}
	for _, word := range words {
		if !strings.Contains(err.Error(), word) {
			t.Errorf("%q does not say %q", err, word)
		}
	}
}
