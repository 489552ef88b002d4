package quantity_test

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

var (
	length      = schema.Dimension{Length: 1}
	frequency   = schema.Dimension{Time: -1}
	angle       = schema.Dimension{Angle: 1}
	temperature = schema.Dimension{Temperature: 1}
)

// The Go compiler rounds its constants to the nearest float64 (language
// specification, "Constants"): it is the reference for decimal values.
func TestParse(t *testing.T) {
	for _, c := range []struct {
		text string
		v    float64
		d    schema.Dimension
	}{
		{"1.55 um", 1.55e-6, length},
		{"1.55um", 1.55e-6, length},
		{"1.30 um", 1.3e-6, length},
		{"0.22 um", 0.22e-6, length},
		{" 20 nm\t", 20e-9, length},
		{"-20 nm", -20e-9, length},
		{"+.5 mm", 0.5e-3, length},
		{"3. cm", 3e-2, length},
		{"1e-3 m", 1e-3, length},
		{"2 in", 0.0508, length},
		{"7 mil", 177.8e-6, length},
		{"0 um", 0, length},
		{"193.1 THz", 193.1e12, frequency},
		{"10.5 GHz", 10.5e9, frequency},
		{"1 MHz", 1e6, frequency},
		{"3 kHz", 3e3, frequency},
		{"1e9 Hz", 1e9, frequency},
		{"88 deg", 88 * math.Pi / 180, angle},
		{"1.5 rad", 1.5, angle},
		{"293.15 K", 293.15, temperature},
		{"20 degC", 293.15, temperature},
		{"-273.15 degC", 0, temperature},
		{"25.7 degC", 298.85, temperature},
		{"-3e-4 1/K", -3e-4, schema.Dimension{Temperature: -1}},
		{"5 1/um", 5e6, schema.Dimension{Length: -1}},
		{"2 um^2", 2e-12, schema.Dimension{Length: 2}},
		{"2 um^-1", 2e6, schema.Dimension{Length: -1}},
		{"20 ps^2/km", 20e-27, schema.Dimension{Time: 2, Length: -1}},
		{"17 ps/nm/km", 17e-6, schema.Dimension{Time: 1, Length: -2}},
		{"1.5e7 S/m", 1.5e7, schema.Dimension{Mass: -1, Length: -3, Time: 3, Current: 2}},
		{"1.5e7 S / m", 1.5e7, schema.Dimension{Mass: -1, Length: -3, Time: 3, Current: 2}},
		{"0.5", 0.5, schema.Dimension{}},
		{"-1e-2", -0.01, schema.Dimension{}},
		{"4 1", 4, schema.Dimension{}},
	} {
		t.Run(c.text, func(t *testing.T) {
			v, d, err := quantity.Parse(c.text)
			if err != nil || v != c.v || d != c.d {
				t.Errorf("got %v %+v, %v; want %v %+v", v, d, err, c.v, c.d)
			}
		})
	}
}

// Moving the exponent in the text and reading it with strconv (correctly
// rounded, Clinger 1990) is another route to the nearest float64.
func TestParseIsNearestDecimal(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for unit, exponent := range map[string]int{
		"nm": -9, "um": -6, "mm": -3, "cm": -2, "km": 3, "kHz": 3, "MHz": 6, "GHz": 9, "THz": 12,
		"fs": -15, "ps": -12, "ns": -9, "us": -6, "ms": -3, "um^2": -12, "1/nm": 9, "1/um^3": 18,
	} {
		t.Run(unit, func(t *testing.T) {
			differ := 0
			for range 2000 {
				text := strconv.FormatFloat(random.NormFloat64(), 'f', 1+random.IntN(18), 64)
				want, _ := strconv.ParseFloat(fmt.Sprintf("%se%d", text, exponent), 64)
				got, _, err := quantity.Parse(text + " " + unit)
				if err != nil || got != want {
					t.Fatalf("%s %s: got %v, %v; want %v", text, unit, got, err, want)
				}
				u, _ := quantity.ParseUnit(unit)
				if v, _ := strconv.ParseFloat(text, 64); v*u.Scale != want {
					differ++
				}
			}
			if differ == 0 {
				t.Error("no case in which a product of floats would have been wrong: the test shows nothing")
			}
		})
	}
}

// Angles and inches against 400-bit arithmetic, pi by Machin's formula.
func TestParseIsNearestElsewhere(t *testing.T) {
	const bits = 400
	scale := map[string]*big.Float{
		"deg": new(big.Float).Quo(machin(bits), big.NewFloat(180)),
		"in":  new(big.Float).SetPrec(bits).Quo(big.NewFloat(254), new(big.Float).SetPrec(bits).SetInt64(10000)),
		"mil": new(big.Float).SetPrec(bits).Quo(big.NewFloat(254), new(big.Float).SetPrec(bits).SetInt64(10000000)),
	}
	random := rand.New(rand.NewPCG(3, 4))
	for unit, factor := range scale {
		t.Run(unit, func(t *testing.T) {
			for range 2000 {
				text := strconv.FormatFloat(180*random.Float64(), 'f', random.IntN(12), 64)
				x, _ := new(big.Float).SetPrec(bits).SetString(text)
				want, _ := x.Mul(x, factor).Float64()
				if got, _, err := quantity.Parse(text + " " + unit); err != nil || got != want {
					t.Fatalf("%s %s: got %v, %v; want %v", text, unit, got, err, want)
				}
			}
		})
	}
}

// machin is pi = 16 atan(1/5) - 4 atan(1/239) (Machin, 1706).
func machin(bits uint) *big.Float {
	atan := func(n int64) *big.Float {
		x := new(big.Float).SetPrec(bits).Quo(big.NewFloat(1), new(big.Float).SetPrec(bits).SetInt64(n))
		square, sum := new(big.Float).Mul(x, x), new(big.Float).SetPrec(bits)
		for k := int64(0); k < int64(bits); k++ {
			term := new(big.Float).Quo(x, new(big.Float).SetInt64(2*k+1))
			if k%2 == 1 {
				term.Neg(term)
			}
			sum.Add(sum, term)
			x = new(big.Float).Mul(x, square)
		}
		return sum
	}
	a, b := atan(5), atan(239)
	return a.Sub(a.Mul(a, big.NewFloat(16)), b.Mul(b, big.NewFloat(4)))
}

func TestParseRefuses(t *testing.T) {
	unit := "a unit such as um, THz or 1/K"
	whole := `a decimal number and its unit, such as "1.30 um"`
	there := "a unit there, such as um or 1/K"
	for _, c := range []struct{ text, found, expected string }{
		{"", "nothing", whole},
		{"  ", "nothing", whole},
		{"um", "the unit um without a number", whole},
		{"wide", `"wide"`, whole},
		{"NaN", `"NaN"`, "a finite decimal number"},
		{"-inf um", `"-inf um"`, "a finite decimal number"},
		{"+Infinity", `"+Infinity"`, "a finite decimal number"},
		{"0x10 um", "a hexadecimal number", whole},
		{"0X1p-2", "a hexadecimal number", whole},
		{"1e999 um", "a number beyond the range of float64", "a magnitude from 5e-324 to 1.8e308 in SI units, or 0"},
		{"1e-999 um", "a number beyond the range of float64", "a magnitude from 5e-324 to 1.8e308 in SI units, or 0"},
		{"1e300 THz", "a number beyond the range of float64", "a magnitude from 5e-324 to 1.8e308 in SI units, or 0"},
		{"1e99999999999999999999 um", "a number beyond the range of float64", "a magnitude from 5e-324 to 1.8e308 in SI units, or 0"},
		{"1.5.2 um", `".2 um" after the number "1.5"`, there},
		{"1e5.3 um", `".3 um" after the number "1e5"`, there},
		{"1,5 um", `a comma after "1"`, "a decimal point, and no separators"},
		{"1_000 nm", `"_000 nm" after the number "1"`, there},
		{"3e-4/K", `"/K" after the number "3e-4"`, there},
		{"1.3um um", `"um" after the unit`, "its end, or * or / and another unit"},
		{"1.3 um 4", `"4" after the unit`, "its end, or * or / and another unit"},
		{"1.3 um;", `";" after the unit`, "its end, or * or / and another unit"},
		{"1.3 Um", `the unknown unit "Um"`, unit + "; did you mean um?"},
		{"1.3 GHZ", `the unknown unit "GHZ"`, unit + "; did you mean GHz?"},
		{"1.3 µm", `the unknown unit "µm"`, unit + "; write um"},
		{"1.3 μm", `the unknown unit "μm"`, unit + "; write um"},
		{"50 Ω", `the unknown unit "Ω"`, unit + "; write ohm"},
		{"1.3 degg", `the unknown unit "degg"`, unit + "; did you mean deg?"},
		{"1.3 furlong", `the unknown unit "furlong"`, unit},
		{"1.3 eum", `the unknown unit "eum"`, unit + "; did you mean um?"},
		{"20 degF", `the unknown unit "degF"`, unit + "; did you mean deg?"},
		{"1 S/", "the end", unit},
		{"1 S/2", `"2"`, unit},
		{"1 1/", "the end", unit},
		{"1 1 um", `"um" after the unit`, "its end, or * or / and another unit"},
		{"1 um^0", `the power "0"`, "a whole number from 1 to 24 or its negative"},
		{"1 um^0.5", `the power "0.5"`, "a whole number from 1 to 24 or its negative"},
		{"1 um^2.5", `the power "2.5"`, "a whole number from 1 to 24 or its negative"},
		{"1 um^", "the power the end", "a whole number from 1 to 24 or its negative"},
		{"1 um^99", `the power "99"`, "a whole number from 1 to 24 or its negative"},
		{"1 um^20*mm^20", "too high a power", "exponents of at most 24"},
		{"1 K/K/K/K/K/K/K/K/K", "a unit of more factors", "at most 8"},
		{"1 THz^24/um^24", "a unit beyond the range of numbers", "smaller powers"},
		{"1 degC/m", "degC in a compound unit", "K (degC is an absolute temperature and stands alone)"},
		{"1 1/degC", "degC in a compound unit", "K (degC is an absolute temperature and stands alone)"},
		{"1 degC^2", "degC in a compound unit", "K (degC is an absolute temperature and stands alone)"},
		{"-300 degC", "-300 degC", "a temperature above -273.15 degC"},
		{strings.Repeat("9", 300), "a text of 300 bytes", "at most 256"},
	} {
		t.Run(c.text, func(t *testing.T) {
			v, _, err := quantity.Parse(c.text)
			var q *quantity.Error
			if !errors.As(err, &q) {
				t.Fatalf("got %v, %v; want an Error", v, err)
			}
			if q.Found != c.found || q.Expected != c.expected || q.Text == "" {
				t.Errorf("got %q: found %s, expected %s\nwant found %s, expected %s", q.Text, q.Found, q.Expected, c.found, c.expected)
			}
		})
	}
}

func TestErrorText(t *testing.T) {
	_, _, err := quantity.Parse("1.3 Um")
	const want = `quantity "1.3 Um": found the unknown unit "Um", expected a unit such as um, THz or 1/K; did you mean um?`
	if err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
}

func TestUnitValue(t *testing.T) {
	u, err := quantity.ParseUnit("um")
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		number string
		v      float64
		ok     bool
	}{{"1.55", 1.55e-6, true}, {"-2e1", -20e-6, true}, {"", 0, false}, {"1 um", 0, false}, {"nan", 0, false}, {"1e999", 0, false}, {strings.Repeat("1", 300), 0, false}} {
		t.Run(c.number, func(t *testing.T) {
			v, err := u.Value(c.number)
			if v != c.v || (err == nil) != c.ok {
				t.Errorf("got %v, %v", v, err)
			}
		})
	}
}

func FuzzParse(f *testing.F) {
	for _, s := range []string{"1.55 um", "-3e-4 1/K", "20 degC", "1 m^24/s^-24", "0x1p5", "1e999", "1deg^24*deg^24", "\xff", "5e-324 m", "1..2", "1 degC^1"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		v, d, err := quantity.Parse(s)
		if err != nil {
			var q *quantity.Error
			if !errors.As(err, &q) || q.Found == "" || q.Expected == "" || len(q.Error()) > 1000 {
				t.Fatalf("not a proper error: %v", err)
			}
			return
		}
		if math.IsNaN(v) || math.IsInf(v, 0) {
			t.Fatalf("%q gives %v", s, v)
		}
		text := quantity.Format(v, d)
		if back, e, err := quantity.Parse(text); err != nil || back != v || e != d {
			t.Fatalf("%q is %v %+v, written %q, read back %v %+v, %v", s, v, d, text, back, e, err)
		}
	})
}

func BenchmarkParse(b *testing.B) {
	for _, text := range []string{"1.55 um", "88 deg"} {
		b.Run(text, func(b *testing.B) {
			for b.Loop() {
				if _, _, err := quantity.Parse(text); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
	u, _ := quantity.ParseUnit("um")
	b.Run("value in um", func(b *testing.B) {
		for b.Loop() {
			if _, err := u.Value("1.5512"); err != nil {
				b.Fatal(err)
			}
		}
	})
}
