package palette

import (
	"image/color"
	"math"
	"os"
	"regexp"
	"strconv"
	"testing"
)

// linear undoes the transfer function of sRGB (IEC 61966-2-1).
func linear(c uint8) float64 {
	x := float64(c) / 255
	if x <= 0.04045 {
		return x / 12.92
	}
	return math.Pow((x+0.055)/1.055, 2.4)
}

// lightness is L* of CIE 1976, another measure than the palette was made in.
func lightness(c color.RGBA) float64 {
	y := 0.2126*linear(c.R) + 0.7152*linear(c.G) + 0.0722*linear(c.B)
	return 116*math.Cbrt(y) - 16
}

func TestOklch(t *testing.T) {
	// CSS Color Module Level 4 (W3C): white, and sRGB red as oklch(0.62796 0.25768 29.234).
	for _, c := range []struct {
		in   lch
		want color.RGBA
	}{{lch{1, 0, 0}, color.RGBA{255, 255, 255, 255}}, {lch{0.62796, 0.25768, 29.234}, color.RGBA{255, 0, 0, 255}}, {lch{0, 0, 0}, color.RGBA{0, 0, 0, 255}}} {
		if got := c.in.rgb(); got != c.want {
			t.Errorf("%v is %v, expected %v", c.in, got, c.want)
		}
	}
}

// TestSequential: lightness runs one way, and over a range of 60 at least: common practice, no source.
func TestSequential(t *testing.T) {
	for name, scale := range map[string]func(float64) color.RGBA{
		"sequential": Sequential,
		"fading":     func(x float64) color.RGBA { return Fading(1 - x) },
	} {
		t.Run(name, func(t *testing.T) {
			last := -1.0
			for _, x := range evenly(0, 1, Shades) {
				l := lightness(scale(x))
				if l < last {
					t.Fatalf("lightness falls from %.2f to %.2f at %.3f", last, l, x)
				}
				last = l
			}
			if first := lightness(scale(0)); last-first < 60 {
				t.Errorf("lightness runs from %.0f to %.0f, expected a range of 60", first, last)
			}
		})
	}
}

func TestDivergingIsBalanced(t *testing.T) {
	for _, x := range evenly(0, 0.5, 50) {
		a, b := lightness(Diverging(0.5-x)), lightness(Diverging(0.5+x))
		if math.Abs(a-b) > 8 {
			t.Errorf("at %.2f from zero the sides have lightness %.0f and %.0f", x, a, b)
		}
	}
}

// Machado, Oliveira and Fernandes, A physiologically-based model for
// simulation of color vision deficiency (2009), severity 1; from memory.
var blindness = map[string][3][3]float64{
	"protanopia":   {{0.152286, 1.052583, -0.204868}, {0.114503, 0.786281, 0.099216}, {-0.003882, -0.048116, 1.051998}},
	"deuteranopia": {{0.367322, 0.860646, -0.227968}, {0.280085, 0.672501, 0.047413}, {-0.011820, 0.042940, 0.968881}},
	"full sight":   {{1, 0, 0}, {0, 1, 0}, {0, 0, 1}},
}

// seen gives CIELAB coordinates (D65) of a colour as it is seen.
func seen(c color.RGBA, m [3][3]float64) [3]float64 {
	in := [3]float64{linear(c.R), linear(c.G), linear(c.B)}
	var v [3]float64
	for i := range v {
		for j := range in {
			v[i] += m[i][j] * in[j]
		}
		v[i] = min(1, max(0, v[i]))
	}
	f := func(t float64) float64 {
		if t > 216./24389 {
			return math.Cbrt(t)
		}
		return (24389./27*t + 16) / 116
	}
	x := f((0.4124*v[0] + 0.3576*v[1] + 0.1805*v[2]) / 0.9505)
	y := f(0.2126*v[0] + 0.7152*v[1] + 0.0722*v[2])
	z := f((0.0193*v[0] + 0.1192*v[1] + 0.9505*v[2]) / 1.089)
	return [3]float64{116*y - 16, 500 * (x - y), 200 * (y - z)}
}

func apart(a, b [3]float64) float64 {
	return math.Sqrt((a[0]-b[0])*(a[0]-b[0]) + (a[1]-b[1])*(a[1]-b[1]) + (a[2]-b[2])*(a[2]-b[2]))
}

func TestDivergingForColourBlind(t *testing.T) {
	for name, m := range blindness {
		for _, x := range []float64{0.2, 0.35, 0.5} {
			// A CIELAB distance of 20 is plain at a glance: common practice, no source.
			if d := apart(seen(Diverging(0.5-x), m), seen(Diverging(0.5+x), m)); d < 20 {
				t.Errorf("%s: at %.2f from zero the sides are %.0f apart, expected 20", name, x, d)
			}
		}
	}
}

// The page's families, up to eight in each of three themes.
func TestFamiliesForColourBlind(t *testing.T) {
	style, err := os.ReadFile("../report/style.css")
	if err != nil {
		t.Fatal(err)
	}
	matches := regexp.MustCompile(`--s(\d):#([0-9a-f]{6})`).FindAllSubmatch(style, -1)
	const mostDrawn = 8
	if len(matches) != 3*mostDrawn { // light, dark, print
		t.Fatalf("%d colours of families, expected %d", len(matches), 3*mostDrawn)
	}
	for theme := range 3 {
		var list []color.RGBA
		for _, m := range matches[theme*mostDrawn : (theme+1)*mostDrawn] {
			n, err := strconv.ParseUint(string(m[2]), 16, 32)
			if err != nil {
				t.Fatal(err)
			}
			list = append(list, color.RGBA{uint8(n >> 16), uint8(n >> 8), uint8(n), 255})
		}
		for name, m := range blindness {
			for i, a := range list[:4] {
				for j, b := range list[:i] {
					if d := apart(seen(a, m), seen(b, m)); d < 10 {
						t.Errorf("theme %d, %s: families %d and %d are %.0f apart, expected 10", theme, name, j, i, d)
					}
				}
			}
		}
	}
}

func evenly(lo, hi float64, n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = lo + (hi-lo)*float64(i)/float64(n-1)
	}
	return out
}
