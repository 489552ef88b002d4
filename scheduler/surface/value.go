package surface

import (
	"fmt"
	"strings"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

// Bounded is a value and a bound on its absolute error, numerical and of
// interpolation together. Both are NaN where the quantity is missing; the bound
// alone is where a node states none.
type Bounded struct {
	Value, Bound float64
}

// Value is a family at one point, in the units of the columns. DNeff and DNg
// are the total sensitivities to the parameters that Surfaces.Sensitivities lists.
type Value struct {
	WavelengthM float64
	FrequencyHz float64
	Neff        Bounded
	Kappa       Bounded
	Ng          Bounded
	GVD         Bounded // ps^2/km
	Beta3       Bounded // ps^3/km
	D           Bounded // ps/(nm km)
	DNeff       []Bounded
	DNg         []Bounded
}

// FamilyError says that there is no such family.
type FamilyError struct {
	Family   string
	Families []string
}

func (e *FamilyError) Error() string {
	return fmt.Sprintf("surface: found family %s, expected one of %s", e.Family, strings.Join(e.Families, ", "))
}

// RangeError says that a value lies outside an axis. Values are in SI.
type RangeError struct {
	Axis          string
	Value, Lo, Hi float64
	dimension     schema.Dimension
}

func (e *RangeError) Error() string {
	format := func(v float64) string { return quantity.Format(v, e.dimension) }
	if e.Lo == e.Hi {
		return fmt.Sprintf("surface: %s: found %s, expected %s (the axis has this value only)", e.Axis, format(e.Value), format(e.Lo))
	}
	return fmt.Sprintf("surface: %s: found %s, expected %s to %s", e.Axis, format(e.Value), format(e.Lo), format(e.Hi))
}

// AbsentError says that a family has no value at a point, or, where Between
// is set, that it has none at a node next to the point, so that nothing is
// known of it there. Which of the possible reasons it is, the surface does not hold.
type AbsentError struct {
	Family  string
	At      string // the node without it: name=value, ...
	Between bool
}

// absence names the reasons why a family may have no value at a node.
const absence = "it is not guided there, or the point failed or was excluded (points.parquet says which)"

func (e *AbsentError) Error() string {
	if e.Between {
		return fmt.Sprintf("surface: family %s has no value at the neighbouring grid point %s: "+absence, e.Family, e.At)
	}
	return fmt.Sprintf("surface: family %s has no value at %s: "+absence, e.Family, e.At)
}
