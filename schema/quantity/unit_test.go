package quantity_test

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

func mustUnit(t *testing.T, s string) quantity.Unit {
	t.Helper()
	u, err := quantity.ParseUnit(s)
	if err != nil {
		t.Fatal(err)
	}
	return u
}

// The relations by which the SI defines its derived units (BIPM, The
// International System of Units, 9th edition, table 4), and those of inch
// and mil (1 in = 25.4 mm, 1000 mil = 1 in).
func TestUnitRelations(t *testing.T) {
	for _, c := range []struct {
		a, b  string
		ratio float64 // a is ratio times b
	}{
		{"Hz", "1/s", 1}, {"W", "kg*m^2/s^3", 1}, {"V", "W/A", 1}, {"ohm", "V/A", 1}, {"S", "A/V", 1}, {"S", "1/ohm", 1},
		{"F", "A*s/V", 1}, {"H", "V*s/A", 1}, {"H*F", "s^2", 1}, {"H/F", "ohm^2", 1},
		{"THz", "1/ps", 1}, {"GHz", "1/ns", 1}, {"MHz", "1/us", 1}, {"kHz", "1/ms", 1}, {"Hz*fs", "1", 1e-15},
		{"km", "m", 1000}, {"m", "cm", 100}, {"cm", "mm", 10}, {"mm", "um", 1000}, {"um", "nm", 1000},
		{"in", "mm", 25.4}, {"in", "mil", 1000}, {"rad", "deg", 180 / math.Pi}, {"W", "mW", 1000}, {"F", "pF", 1e12}, {"H", "nH", 1e9},
	} {
		t.Run(c.a+" in "+c.b, func(t *testing.T) {
			a, b := mustUnit(t, c.a), mustUnit(t, c.b)
			// Both scales are rounded once, and so is their quotient: 2^-52 each way.
			if a.Dimension != b.Dimension || math.Abs(a.Scale/b.Scale/c.ratio-1) > 4*0x1p-52 {
				t.Errorf("%+v and %+v", a, b)
			}
		})
	}
}

func TestParseUnitFields(t *testing.T) {
	if u := mustUnit(t, "degC"); u.Scale != 1 || u.Offset != 273.15 || u.Dimension != temperature || u.Text != "degC" {
		t.Errorf("degC: %+v", u)
	}
	if u := mustUnit(t, " S / m "); u.Text != "S/m" || u.Scale != 1 || u.Offset != 0 {
		t.Errorf("S/m: %+v", u)
	}
	if u, err := quantity.ParseUnit(""); err == nil {
		t.Errorf("no unit gives %+v", u)
	}
}

func TestNames(t *testing.T) {
	all := quantity.Names()
	for i, n := range all {
		t.Run(n, func(t *testing.T) {
			if slices.Contains(all[:i], n) {
				t.Error("listed twice")
			}
			if mustUnit(t, n).Text != n || !quantity.IsName(n) {
				t.Error("not read as itself")
			}
		})
	}
	// The list of the sweep file's contract.
	for _, n := range []string{"nm", "um", "mm", "cm", "m", "in", "mil", "Hz", "kHz", "MHz", "GHz", "THz", "deg", "rad", "K", "degC"} {
		if !slices.Contains(all, n) {
			t.Errorf("%s is missing", n)
		}
	}
	if quantity.IsName("wide") {
		t.Error("wide is no unit")
	}
}

// Names and units as the contract of the tables gives them.
func TestColumnUnit(t *testing.T) {
	for _, c := range []struct {
		of, suffix, unit string
		scale            float64
	}{
		{"1", "", "", 1},
		{"um", "m", "m", 1},
		{"THz", "hz", "Hz", 1},
		{"deg", "deg", "deg", 180 / math.Pi},
		{"K", "K", "K", 1},
		{"1/K", "per_K", "1/K", 1},
		{"S/m", "S_per_m", "S/m", 1},
		{"1/um", "per_m", "1/m", 1},
		{"um^2", "m2", "m^2", 1},
		{"ps", "s", "s", 1},
		{"ps^2/km", "s2_per_m", "s^2/m", 1},
		{"m/s", "m_per_s", "m/s", 1},
		{"F/m", "f_per_m", "F/m", 1},
		{"nH/mm", "h_per_m", "H/m", 1},
		{"ohm", "ohm", "ohm", 1},
		{"um/V", "m_per_V", "m/V", 1},
		{"1/V", "per_V", "1/V", 1},
		{"K/mW", "K_per_W", "K/W", 1},
		{"1/s^2", "per_s2", "1/s^2", 1},
		{"1/deg", "per_deg", "1/deg", math.Pi / 180},
		{"deg/um", "deg_per_m", "deg/m", 180 / math.Pi},
		{"rad^2", "deg2", "deg^2", 180 * 180 / (math.Pi * math.Pi)},
		{"kg*m", "kg_m", "kg*m", 1},
		{"A/m/K", "A_per_m_per_K", "A/m/K", 1},
	} {
		t.Run(c.of, func(t *testing.T) {
			d := mustUnit(t, c.of).Dimension
			suffix, unit, scale := quantity.ColumnUnit(d)
			if suffix != c.suffix || unit != c.unit || math.Abs(scale/c.scale-1) > 4*0x1p-52 {
				t.Errorf("got %q, %q, %v; want %q, %q, %v", suffix, unit, scale, c.suffix, c.unit, c.scale)
			}
		})
	}
}

// Whatever the dimension, the column's unit reads back as that dimension and
// its scale is the inverse of the unit's.
func TestColumnUnitReadsBack(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	e := func() int { return random.IntN(9) - 4 }
	for range 2000 {
		d := schema.Dimension{Length: e(), Mass: e(), Time: e(), Current: e(), Temperature: e(), Angle: e()}
		if d == (schema.Dimension{}) {
			continue
		}
		_, unit, scale := quantity.ColumnUnit(d)
		u := mustUnit(t, unit)
		if u.Dimension != d || math.Abs(u.Scale*scale-1) > 16*0x1p-52 {
			t.Fatalf("%+v: %q is %+v, scale %v", d, unit, u, scale)
		}
	}
}

func TestDescribe(t *testing.T) {
	for unit, want := range map[string]string{
		"1": "a pure number", "um": "a length", "um^2": "an area", "GHz": "a frequency", "ps": "a time", "deg": "an angle",
		"K": "a temperature", "1/K": "1/K", "S/m": "S/m", "V": "V",
	} {
		t.Run(unit, func(t *testing.T) {
			if got := quantity.Describe(mustUnit(t, unit).Dimension); got != want {
				t.Errorf("got %q, want %q", got, want)
			}
		})
	}
}

func TestFormat(t *testing.T) {
	for _, c := range []struct {
		text, want string
	}{
		{"1300 nm", "1.3 um"}, {"1.3 um", "1.3 um"}, {"20 nm", "20 nm"}, {"0.5 nm", "0.5 nm"}, {"-0.01 um", "-10 nm"}, {"0 nm", "0 um"}, {"22.86 mm", "22.86 mm"},
		{"3 in", "76.2 mm"}, {"2.5 m", "2.5 m"}, {"40 km", "40000 m"}, {"1e9 km", "1e12 m"}, {"1e-20 m", "1e-11 nm"}, {"1234567 m", "1234567 m"},
		{"193.1 THz", "193.1 THz"}, {"10000 MHz", "10 GHz"}, {"5 Hz", "5 Hz"}, {"0 Hz", "0 kHz"},
		{"88 deg", "88 deg"}, {"0.1 deg", "0.1 deg"}, {"20 degC", "293.15 K"}, {"-3e-4 1/K", "-0.0003 1/K"}, {"1.5e7 S/m", "1.5e7 S/m"},
		{"0.5", "0.5"}, {"-0.01", "-0.01"}, {"1e-6", "1e-6"}, {"3.4777", "3.4777"}, {"0", "0"}, {"1e300", "1e300"}, {"2 um^2", "2e-12 m^2"},
	} {
		t.Run(c.text, func(t *testing.T) {
			v, d, err := quantity.Parse(c.text)
			if err != nil {
				t.Fatal(err)
			}
			if got := quantity.Format(v, d); got != c.want {
				t.Errorf("got %q, want %q", got, c.want)
			}
		})
	}
	t.Run("not finite", func(t *testing.T) {
		if a, b := quantity.Format(math.NaN(), length), quantity.Format(math.Inf(1), schema.Dimension{}); a != "NaN m" || b != "+Inf" {
			t.Errorf("got %q, %q", a, b)
		}
	})
}

// Format gives the very value back, over the whole range and for odd
// dimensions too.
func TestFormatReadsBack(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 8))
	for _, unit := range []string{"1", "m", "Hz", "rad", "K", "1/K", "S/m", "rad/m", "rad^2*m/s^2", "kg/A"} {
		t.Run(unit, func(t *testing.T) {
			d := mustUnit(t, unit).Dimension
			for range 2000 {
				v := math.Ldexp(random.NormFloat64(), random.IntN(1600)-800)
				text := quantity.Format(v, d)
				if back, e, err := quantity.Parse(text); err != nil || back != v || e != d {
					t.Fatalf("%v is written %q, read back as %v %+v, %v", v, text, back, e, err)
				}
			}
		})
	}
}

func TestDimensions(t *testing.T) {
	area := schema.Dimension{Length: 2}
	if d, ok := quantity.Product(length, area); !ok || d != (schema.Dimension{Length: 3}) {
		t.Errorf("product: %+v, %v", d, ok)
	}
	if d, ok := quantity.Quotient(length, area); !ok || d != (schema.Dimension{Length: -1}) {
		t.Errorf("quotient: %+v, %v", d, ok)
	}
	if d, ok := quantity.Power(area, -12); !ok || d != (schema.Dimension{Length: -24}) {
		t.Errorf("power: %+v, %v", d, ok)
	}
	for _, n := range []int{13, -13, math.MaxInt, math.MinInt} {
		if d, ok := quantity.Power(area, n); ok {
			t.Errorf("power %d: %+v", n, d)
		}
	}
	if d, ok := quantity.Root(area, 2); !ok || d != length {
		t.Errorf("root: %+v, %v", d, ok)
	}
	if d, ok := quantity.Root(length, 2); ok {
		t.Errorf("root of a length: %+v", d)
	}
}

func TestNearest(t *testing.T) {
	among := []string{"height", "width", "index_shift", "h"}
	for _, c := range []struct{ word, want string }{
		{"heigth", "height"}, {"Width", "width"}, {"widt", "width"}, {"indexshift", "index_shift"}, {"H", "h"}, {"g", ""}, {"temperature", ""}, {"", ""},
	} {
		t.Run(c.word, func(t *testing.T) {
			if got, ok := quantity.Nearest(c.word, among); got != c.want || ok != (c.want != "") {
				t.Errorf("got %q, %v; want %q", got, ok, c.want)
			}
		})
	}
}
