package fieldmap

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"strings"

	"betaloom/solvers"
)

// Quantities are the names that Options.Of takes.
func Quantities() []string {
	return []string{"e", "ex", "ey", "ez", "h", "hx", "hy", "hz", "s"}
}

// quantity is what is drawn.
type quantity struct {
	symbol string
	unit   string // SI, without prefix
	signed bool
	values []float64 // at each place, in unit
}

// backward is the share of the largest forward power flow from which on flow backward is worth colours of its own: the field at a dense
// corner has a little, in spots too small to be seen.
const backward = 0.2

// quantityOf evaluates one of Quantities over the field's grid.
func quantityOf(f *solvers.Field, name string) (q quantity) {
	vector, unit := &f.E, "V/m"
	if name[0] == 'h' {
		vector, unit = &f.H, "A/m"
	}
	q = quantity{unit: unit, values: make([]float64, len(f.E[0]))}
	upper := strings.ToUpper(name[:1])
	switch {
	case name == "s":
		q.symbol, q.unit = "axial power flow", "W/m²"
		q.fill(func(i int) float64 {
			return real(f.E[0][i]*cmplx.Conj(f.H[1][i])-f.E[1][i]*cmplx.Conj(f.H[0][i])) / 2
		})
		q.signed = slices.Min(q.values) < -backward*slices.Max(q.values)
	case len(name) == 1:
		q.symbol = "|" + upper + "|"
		q.fill(func(i int) float64 {
			return math.Hypot(math.Hypot(cmplx.Abs(vector[0][i]), cmplx.Abs(vector[1][i])), cmplx.Abs(vector[2][i]))
		})
	default:
		c := int(name[1] - 'x')
		part, of := "Re ", func(v complex128) float64 { return real(v) }
		if c == 2 {
			part, of = "Im ", func(v complex128) float64 { return imag(v) }
		}
		q.symbol, q.signed = part+upper+name[1:], true
		q.fill(func(i int) float64 { return of(vector[c][i]) })
	}
	return q
}

func (q *quantity) fill(at func(i int) float64) {
	for i := range q.values {
		q.values[i] = at(i)
	}
}

// span is the range of a scale that starts at zero or has it in its middle.
func (q *quantity) span() (low, high float64) { return q.between(q.largest()) }

func (q *quantity) between(high float64) (low, _ float64) {
	if q.signed {
		return -high, high
	}
	return 0, high
}

// largest is the size of the largest value, 1 where there is no field.
func (q *quantity) largest() (high float64) {
	for _, v := range q.values {
		high = max(high, math.Abs(v))
	}
	if high == 0 {
		return 1
	}
	return high
}

// At a corner of metal or of a dense medium a field has no bound. Colours end where the larger values, at corners or not, hold the share
// spikes of the sum of squares, if the largest is more than steep times that.
const (
	spikes = 0.05
	steep  = 1.4
)

// colours is the range of a map's colours, and whether values lie beyond it.
func (q *quantity) colours() (low, high float64, beyond bool) {
	sizes, all := make([]float64, len(q.values)), 0.0
	for i, v := range q.values {
		sizes[i] = math.Abs(v)
		all += v * v
	}
	slices.Sort(sizes)
	common := 0.0
	for i, sum := len(sizes)-1, 0.0; i >= 0 && sum <= spikes*all; i-- {
		common = sizes[i]
		sum += common * common
	}
	high = q.largest()
	if common > 0 && high > steep*common {
		high, beyond = common, true
	}
	low, high = q.between(high)
	return low, high, beyond
}

// prefixed gives the factor and the name of the unit that suits values up to high.
func prefixed(high float64, unit string) (factor float64, name string) {
	for i, p := range []string{"E", "P", "T", "G", "M", "k", "", "m", "µ", "n", "p"} {
		if f := math.Pow(10, float64(18-3*i)); high >= f {
			return 1 / f, p + unit
		}
	}
	return 1, unit
}

// label is the scale's title, with its unit and the power that it is for.
func (q *quantity) label(unit string, f *solvers.Field) string {
	if len(f.X) == 1 {
		return fmt.Sprintf("%s (%s at 1 W per metre of width)", q.symbol, unit)
	}
	return fmt.Sprintf("%s (%s at 1 W)", q.symbol, unit)
}
