package part

import (
	"encoding/binary"
	"math"
	"slices"
	"strings"
	"unicode/utf8"

	"betaloom/schema"
	"betaloom/schema/column"
)

// From SI to the units of the columns.
const (
	ps2PerKm  = 1e27 // s^2/m
	ps3PerKm  = 1e39 // s^3/m
	psPerNmKm = 1e6  // s/m^2
)

// dbPerNeper is 20/ln 10: decibels of power for one neper of amplitude.
const dbPerNeper = 8.685889638065036553

// The order of the calls below is that of column.Part.

func (b *Builder) point(pt *Point) (wavelength, frequency float64) {
	b.col = 0
	b.integer(int64(b.points))
	for i, place := range b.places {
		b.float(pt.Values[place] * b.scales[i])
	}
	wavelength, frequency = b.spectrum(pt)
	b.float(wavelength)
	b.float(frequency)
	guided := int64(pt.Guided)
	if pt.Guided < 0 {
		guided = column.MissingInt
	}
	b.integer(guided)
	b.text(pt.State)
	b.text(pt.Reason)
	return wavelength, frequency
}

// spectrum gives wavelength and frequency; the one that is a parameter
// keeps its value to the last digit.
func (b *Builder) spectrum(pt *Point) (wavelength, frequency float64) {
	frequency = pt.FrequencyHz
	if b.freq >= 0 {
		frequency = pt.Values[b.freq]
	}
	if b.wave >= 0 {
		wavelength = pt.Values[b.wave]
		return wavelength, schema.LightSpeed / wavelength
	}
	return schema.LightSpeed / frequency, frequency
}

func (b *Builder) noMode() {
	for ; b.col < len(b.batch.Columns); b.col++ {
		v := &b.batch.Vectors[b.col]
		switch b.batch.Columns[b.col].Type {
		case column.Float64:
			v.Floats[b.row] = math.NaN()
		case column.Int64, column.Int32:
			v.Ints[b.row] = column.MissingInt
		case column.String:
			v.Codes[b.row] = 0
		case column.Bytes:
			clear(v.Blobs[b.row*column.SignatureBytes : (b.row+1)*column.SignatureBytes])
		}
	}
}

func (b *Builder) mode(i int, m *Mode, wavelength, frequency float64) {
	b.integer(int64(i))
	b.text(m.Family)
	b.text(m.Type)
	b.text(m.Symmetry)
	b.dispersion(m, wavelength, frequency)
	b.float(m.NeffErr)
	b.float(m.NgErr)
	b.float(m.GVDErr * ps2PerKm)
	b.float(m.Beta3Err * ps3PerKm)
	b.float(m.KappaErr)
	b.sensitivities(m.DNeff)
	b.sensitivities(m.DNg)
	b.float(m.ExShare)
	b.float(m.Aeff)
	b.float(m.Weff)
	for _, share := range m.Confinement {
		b.float(share)
	}
	b.line(m)
	origin := "solved"
	if m.Reduced {
		origin = "reduced"
	}
	b.text(origin)
	b.text(b.flag(m))
	b.signature(&m.Signature)
}

func (b *Builder) dispersion(m *Mode, wavelength, frequency float64) {
	k := 2 * math.Pi * frequency / schema.LightSpeed
	b.float(m.Neff)
	b.float(m.Kappa)
	b.float(dbPerNeper * k * m.Kappa)
	b.float(m.Ng)
	b.float(m.GVD * ps2PerKm)
	b.float(-2 * math.Pi * schema.LightSpeed / (wavelength * wavelength) * m.GVD * psPerNmKm)
	b.float(m.Beta3 * ps3PerKm)
}

func (b *Builder) sensitivities(d []float64) {
	for i, v := range d {
		b.float(v / b.bases[i])
	}
}

func (b *Builder) line(m *Mode) {
	z := m.Z
	if m.ZDefinition == "" {
		z = complex(math.NaN(), math.NaN())
	}
	b.float(real(z))
	b.float(imag(z))
	b.text(m.ZDefinition)
	b.float(m.Cutoff)
	b.float(m.CPerM)
	b.float(m.LPerM)
}

// flag joins the mode's flags, with accuracy among them where a bound is above
// what was asked or is missing.
func (b *Builder) flag(m *Mode) string {
	if !b.inaccurate(m) && len(m.Flags) == 0 {
		return ""
	}
	b.flags = append(b.flags[:0], m.Flags...)
	if b.inaccurate(m) && !slices.Contains(b.flags, Accuracy) {
		b.flags = append(b.flags, Accuracy)
	}
	return strings.Join(b.flags, ";")
}

// Accuracy is the flag of a row with a bound above what was asked.
const Accuracy = "accuracy"

func (b *Builder) inaccurate(m *Mode) bool {
	a := &b.physics.Accuracy
	return above(m.Neff, m.NeffErr, a.Neff) || above(m.Ng, m.NgErr, a.Ng) ||
		above(m.GVD, m.GVDErr*ps2PerKm, a.GVDPs2PerKm) || above(m.Beta3, m.Beta3Err*ps3PerKm, a.Beta3Ps3PerKm)
}

func above(value, bound, asked float64) bool {
	return asked > 0 && !math.IsNaN(value) && !(bound <= asked)
}

func (b *Builder) integer(v int64) {
	b.batch.Vectors[b.col].Ints[b.row] = v
	b.col++
}

func (b *Builder) float(v float64) {
	b.batch.Vectors[b.col].Floats[b.row] = v
	b.col++
}

func (b *Builder) text(s string) {
	b.batch.Vectors[b.col].Codes[b.row] = b.batch.Texts.Code(clip(s))
	b.col++
}

// clip cuts a text to MaxText bytes of valid UTF-8.
func clip(s string) string {
	if len(s) <= MaxText && utf8.ValidString(s) {
		return s
	}
	s = strings.ToValidUTF8(s, "\uFFFD")
	if len(s) <= MaxText {
		return s
	}
	end := MaxText - len("...")
	for !utf8.RuneStart(s[end]) {
		end--
	}
	return s[:end] + "..."
}

func (b *Builder) signature(s *[16]float32) {
	at := b.row * column.SignatureBytes
	for _, v := range s {
		binary.LittleEndian.PutUint32(b.batch.Vectors[b.col].Blobs[at:], math.Float32bits(v))
		at += 4
	}
	b.col++
}
