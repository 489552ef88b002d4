package report

import (
	"math"
	"strings"
	"testing"

	"betaloom/schema"
)

func TestRounded(t *testing.T) {
	for _, c := range []struct {
		v, bound float64
		most     int
		want     string
	}{
		{1.5432178, 3e-6, 12, "1.54322"}, // 1e-5 covers 3e-6; 1e-6 does not
		{1.5432178, 4e-7, 12, "1.543218"},
		{1.5432178, 1e-6, 12, "1.543218"},
		{1.5432178, 1.1e-6, 12, "1.54322"},
		{28.4, 9, 12, "30"},
		{1.54321780001, 1e-13, 6, "1.54322"},
		{-1832.7057, 0.2, 12, "−1833"},
		{-1832.7057, 0.04, 12, "−1832.7"},
		{21495.69, 300, 12, "21000"},
		{3.2, 0, 5, "3.2000"}, // no bound known
		{3.2, math.NaN(), 5, "3.2000"},
		{0, 0, 5, "0"},
		{0, 1e-3, 5, "0.000"},
		{math.NaN(), 1e-3, 5, "–"},
		{2.5e9, 4e3, 12, "2.50000 × 10⁹"},
	} {
		if got := rounded(c.v, c.bound, c.most); got != c.want {
			t.Errorf("rounded(%g, %g, %d) = %q, expected %q", c.v, c.bound, c.most, got, c.want)
		}
	}
}

func TestShort(t *testing.T) {
	for v, want := range map[float64]string{
		0: "0", 1.30: "1.3", -0.01: "−0.01", 0.30000000000000004: "0.3", 293.15: "293.15",
		3e-12: "3 × 10⁻¹²", -2.5e8: "−2.5 × 10⁸", 1e10: "1 × 10¹⁰", 123456.789: "123457",
	} {
		if got := short(v, 6); got != want {
			t.Errorf("short(%g) = %q, expected %q", v, got, want)
		}
	}
}

func TestShortHasNoNegativeZero(t *testing.T) {
	if got := short(math.Copysign(0, -1), 4); got != "0" {
		t.Errorf("minus zero is written %q", got)
	}
}

func TestUnits(t *testing.T) {
	for _, c := range []struct {
		v    float64
		d    schema.Dimension
		want string
	}{
		{1.55e-6, metres(), "1.55 µm"},
		{800e-9, metres(), "800 nm"},
		{2e-3, metres(), "2 mm"},
		{0, metres(), "0 nm"},
		{math.Pi / 2, schema.Dimension{Angle: 1}, "90°"},
		{293.15, schema.Dimension{Temperature: 1}, "293.15 K"},
		{193.4e12, schema.Dimension{Time: -1}, "193.4 THz"},
		{-0.01, schema.Dimension{}, "−0.01"},
		{-3e-4, schema.Dimension{Temperature: -1}, "−0.0003 K⁻¹"},
		{2, schema.Dimension{Length: 1, Time: -2}, "2 m·s⁻²"},
	} {
		if got := strings.ReplaceAll(value(c.v, c.d), "\u00a0", " "); got != c.want {
			t.Errorf("value(%g) = %q, expected %q", c.v, got, c.want)
		}
	}
}

func TestCount(t *testing.T) {
	for n, want := range map[int]string{0: "0", 999: "999", 1000: "1\u202f000", 1234567: "1\u202f234\u202f567", -12345: "−12\u202f345"} {
		if got := count(n); got != want {
			t.Errorf("count(%d) = %q, expected %q", n, got, want)
		}
	}
}

func TestTicks(t *testing.T) {
	for _, c := range []struct {
		s    span
		n    int
		want []string
	}{
		{span{1.3e0, 1.7}, 5, []string{"1.3", "1.4", "1.5", "1.6", "1.7"}},
		{span{-0.01, 0.01}, 4, []string{"−0.010", "−0.005", "0.000", "0.005", "0.010"}},
		{span{-1000, 60}, 5, []string{"−1000", "−800", "−600", "−400", "−200", "0"}},
		{span{0, 3e-12}, 3, []string{"0", "1 × 10⁻¹²", "2 × 10⁻¹²", "3 × 10⁻¹²"}},
	} {
		values, decimals := c.s.ticks(c.n)
		got := labels(values, decimals)
		if len(got) != len(c.want) {
			t.Errorf("ticks of %v: %q, expected %q", c.s, got, c.want)
			continue
		}
		for i := range got {
			if got[i] != c.want[i] {
				t.Errorf("ticks of %v: %q, expected %q", c.s, got, c.want)
				break
			}
		}
	}
}

func TestSturdy(t *testing.T) {
	values := linspace(-100, 100, 1000)
	if s, beyond := sturdy(values); s != (span{-100, 100}) || beyond != 0 {
		t.Errorf("range %v with %g beyond, expected all", s, beyond)
	}
	values[3], values[4] = 1e6, math.NaN()
	s, beyond := sturdy(values)
	if s.Hi > 200 || s.Lo > -99 || math.Abs(beyond-1/999.) > 1e-9 {
		t.Errorf("range %v with %g beyond, expected one value of 999 left out", s, beyond)
	}
}
