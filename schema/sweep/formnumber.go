package sweep

import (
	"errors"
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

// The dimensions of the numbers of a sweep file.
var (
	pure           = schema.Dimension{}
	length         = schema.Dimension{Length: 1}
	angle          = schema.Dimension{Angle: 1}
	temperature    = schema.Dimension{Temperature: 1}
	perTemperature = schema.Dimension{Temperature: -1}
	conductivity   = schema.Dimension{Mass: -1, Length: -3, Time: 3, Current: 2}
	perTime        = schema.Dimension{Time: -1}
)

// measure is what a number must be: its dimension and its range.
type measure struct {
	dim     schema.Dimension
	example string // 0.8 um
	in      span
}

// span is a range of values and its name for messages.
type span struct {
	lo, hi float64
	open   bool   // the ends are outside
	what   string // "above zero"
}

var (
	anyValue    = span{math.Inf(-1), math.Inf(1), false, ""}
	positive    = span{0, math.Inf(1), true, "above zero"}
	notNegative = span{0, math.Inf(1), false, "of zero or more"}
)

func (s span) holds(v float64) bool {
	if s.open {
		return v > s.lo && v < s.hi
	}
	return v >= s.lo && v <= s.hi
}

// String describes the measure: "a length above zero, such as 0.8 um".
func (m measure) String() string {
	text := quantity.Describe(m.dim)
	if !strings.HasPrefix(text, "a") {
		text = "a quantity in " + text
	}
	if m.in.what != "" {
		text += " " + m.in.what
	}
	return text + ", such as " + m.example
}

// literal is a quantity as written.
type literal struct {
	v    float64
	dim  schema.Dimension
	text string
	path string
}

// absolute reports whether the quantity was written on a scale with an
// offset, so that it is no difference.
func (l literal) absolute() bool { return strings.HasSuffix(l.text, "degC") }

// anyQuantity is a form for a quantity of any dimension.
type anyQuantity struct{}

func (f anyQuantity) read(r *reader, at place) (literal, bool) { return r.literal(at, f.expects()) }
func (anyQuantity) expects() string                            { return `a quantity such as "0.80 um"` }
func (anyQuantity) describe() fragment {
	return fragment{"anyOf": []fragment{{"type": "number"}, {"type": "string", "pattern": unitPattern("?", quantity.Names()...)}}}
}

// literal reads a quantity of whatever dimension. What cannot be read has
// the value NaN.
func (r *reader) literal(at place, expected string) (literal, bool) {
	l := literal{v: math.NaN(), path: at.path}
	text, ok := r.scalar(at, expected)
	if !ok {
		return l, false
	}
	l.text = text
	v, d, err := quantity.Parse(text)
	if err != nil {
		found := quote(text)
		var e *quantity.Error
		if quantity.NumberLength(text) > 0 && errors.As(err, &e) {
			found, expected = e.Found, e.Expected
		}
		r.fault(at.path, found, expected)
		return l, false
	}
	l.v, l.dim = v, d
	return l, true
}

// plainNumber is a form for a quantity of one measure that cannot be a parameter.
type plainNumber struct{ measure }

func (f plainNumber) read(r *reader, at place) (float64, bool) {
	l, ok := r.literal(at, f.String())
	return l.v, ok && r.measured(l, f.measure, f.String())
}

func (f plainNumber) expects() string    { return f.String() }
func (f plainNumber) describe() fragment { return f.fragment() }

// measured checks a quantity against what it must be.
func (r *reader) measured(l literal, m measure, expected string) bool {
	switch {
	case l.dim != m.dim:
		r.fault(l.path, quote(l.text)+", "+quantity.Describe(l.dim), expected)
	case !m.in.holds(l.v):
		r.fault(l.path, quote(l.text), expected)
	default:
		return true
	}
	return false
}

// numeric is a form for a number: a quantity of the right dimension or the
// name of a parameter.
type numeric struct{ measure }

// numberUse is a place where a parameter stands for a number.
type numberUse struct {
	path, name string
	measure
}

var word = regexp.MustCompile(`^[A-Za-z_][A-Za-z0-9_-]*$`)

func (f numeric) read(r *reader, at place) (schema.Number, bool) {
	text, ok := r.scalar(at, f.expects())
	if !ok {
		return schema.Number{Value: math.NaN()}, false
	}
	if word.MatchString(text) {
		r.numbers = append(r.numbers, numberUse{at.path, text, f.measure})
		return schema.Number{Parameter: text}, true
	}
	if _, _, err := quantity.Parse(text); err != nil && strings.ContainsAny(text, "+*()") {
		r.fault(at.path, quote(text), f.expects()+"; an expression stands under parameters, as name: {expr: ...}")
		return schema.Number{Value: math.NaN()}, false
	}
	l, ok := r.literal(at, f.expects())
	return schema.Number{Value: l.v}, ok && r.measured(l, f.measure, f.expects())
}

func (f numeric) expects() string { return f.String() + ", or the name of a parameter" }

func (f numeric) describe() fragment {
	return fragment{"anyOf": []fragment{f.fragment(), parameterName()}}
}

// The measures of the sweep file.
func lengthOf(in span) measure { return measure{length, "0.8 um", in} }
func pureOf(in span, example string) measure {
	return measure{pure, example, in}
}

func sidewallAngle() measure {
	return measure{angle, "88 deg", span{0, math.Pi, true, "between 0 deg and 180 deg"}}
}

// wholeNumber is a form for a whole number between two others.
type wholeNumber struct {
	least, most int
	what        string // of modes
}

var digits = regexp.MustCompile(`^[+-]?[0-9]{1,18}$`)

func (f wholeNumber) read(r *reader, at place) (int, bool) {
	text, ok := r.scalar(at, f.expects())
	if !ok {
		return f.least, false
	}
	n := f.least - 1
	if digits.MatchString(text) {
		n, _ = strconv.Atoi(text) // eighteen digits fit
	}
	if n < f.least || n > f.most {
		r.fault(at.path, quote(text), f.expects())
		return f.least, false
	}
	return n, true
}

func (f wholeNumber) expects() string {
	if f.least == f.most {
		return fmt.Sprintf("%s %d", f.what, f.least)
	}
	return fmt.Sprintf("%s, a whole number from %d to %d", f.what, f.least, f.most)
}

func (f wholeNumber) describe() fragment {
	return fragment{"type": "integer", "minimum": f.least, "maximum": f.most}
}
