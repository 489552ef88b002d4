package sweep

import "betaloom/schema"

// Window is a question that the sweep is run for: the designs whose family
// meets every requirement.
type Window struct {
	Name      string
	Family    string // empty: any family
	Require   []Requirement
	Tolerance []Tolerance // in file order
	Correlate []Correlation
}

// Requirement bounds one column, in the column's unit; or, where Any is set,
// one of several requirements suffices and nothing else is set.
type Requirement struct {
	Column  string
	AtLeast *float64 // between sets both
	AtMost  *float64
	For     []Stretch // where it must hold; empty: at the design itself
	Any     []Requirement
}

// Stretch is a part of an axis.
type Stretch struct {
	Parameter string
	Lo, Hi    float64 // SI units, angles in radians
}

// Spread is the shape of a tolerance.
type Spread string

// The shapes of a tolerance.
const (
	Normal  Spread = "normal"  // By is the standard deviation
	Uniform Spread = "uniform" // within By on either side
)

// Tolerance is how far a parameter strays from its design value.
type Tolerance struct {
	Parameter string
	Spread    Spread
	By        float64 // SI units, angles in radians; above zero
}

// Correlation is the correlation coefficient of two toleranced parameters.
type Correlation struct {
	A, B string
	Rho  float64 // between -1 and 1
}

// content is the sweep file after its forms have read it and before the
// whole is checked.
type content struct {
	name       string
	materials  []named[schema.Material]
	parameters []named[parameter]
	keep       text
	points     points
	section    schema.Section
	equation   string
	modes      int
	accuracy   schema.Accuracy
	windows    []Window
}
