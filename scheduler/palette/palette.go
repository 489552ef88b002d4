// Package palette holds the colours of maps: sequential scales for values of one sign, a diverging one for values
// about zero.
//
// All are even in lightness as the eye sees it and stay readable under every common colour blindness, in print without colour
// too. They are made in Oklab, and tests hold them to another measure.
package palette

import (
	"image/color"
	"math"
)

// Shades is the number of colours of a map.
const Shades = 200

// lch is a colour in the cylindrical form of Oklab (Ottosson, A perceptual
// color space for image processing, 2020): lightness, chroma and hue in degrees.
type lch struct{ L, C, H float64 }

// Sequential runs, for t from 0 to 1, from dark to light with an even rise of lightness, which
// is what colour-blind readers go by, from violet over blue-green to sand.
func Sequential(t float64) color.RGBA {
	return blend(t, []lch{{0.28, 0.09, 300}, {0.42, 0.11, 265}, {0.57, 0.09, 225}, {0.71, 0.10, 180}, {0.84, 0.11, 130}, {0.95, 0.07, 95}})
}

// Fading runs from white to dark with an even fall of lightness, over blue-green and blue to violet: for maps that
// fade into the page.
func Fading(t float64) color.RGBA {
	return blend(t, []lch{{0.985, 0, 190}, {0.84, 0.08, 190}, {0.695, 0.11, 215}, {0.55, 0.12, 250}, {0.405, 0.13, 285}, {0.26, 0.10, 310}})
}

// Diverging is blue below zero (t < 0.5), orange above, and light at zero;
// blue and orange stay apart under every common colour blindness.
func Diverging(t float64) color.RGBA {
	if t < 0.5 {
		return blend(1-2*t, []lch{{0.96, 0, 245}, {0.80, 0.08, 245}, {0.58, 0.13, 255}, {0.36, 0.13, 265}})
	}
	return blend(2*t-1, []lch{{0.96, 0, 75}, {0.82, 0.09, 72}, {0.62, 0.13, 55}, {0.40, 0.11, 40}})
}

// blend interpolates between evenly spaced stops.
func blend(t float64, stops []lch) color.RGBA {
	t = min(1, max(0, t)) * float64(len(stops)-1)
	i := min(int(t), len(stops)-2)
	f := t - float64(i)
	a, b := stops[i], stops[i+1]
	return lch{a.L + f*(b.L-a.L), a.C + f*(b.C-a.C), a.H + f*(b.H-a.H)}.rgb()
}

// rgb converts by Ottosson's matrices and clips to the sRGB gamut.
func (c lch) rgb() color.RGBA {
	sin, cos := math.Sincos(c.H * math.Pi / 180)
	a, b := c.C*cos, c.C*sin
	l := cube(c.L + 0.3963377774*a + 0.2158037573*b)
	m := cube(c.L - 0.1055613458*a - 0.0638541728*b)
	s := cube(c.L - 0.0894841775*a - 1.2914855480*b)
	return color.RGBA{
		R: channel(4.0767416621*l - 3.3077115913*m + 0.2309699292*s),
		G: channel(-1.2684380046*l + 2.6097574011*m - 0.3413193965*s),
		B: channel(-0.0041960863*l - 0.7034186147*m + 1.7076147010*s),
		A: 255,
	}
}

func cube(x float64) float64 { return x * x * x }

// channel applies the transfer function of sRGB (IEC 61966-2-1).
func channel(x float64) uint8 {
	x = min(1, max(0, x))
	if x <= 0.0031308 {
		x *= 12.92
	} else {
		x = 1.055*math.Pow(x, 1/2.4) - 0.055
	}
	return uint8(255*x + 0.5)
}
