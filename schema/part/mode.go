package part

// The states of a point.
const (
	Solved   = "solved"   // it has at least one mode
	NoMode   = "no-mode"  // it is solved, and nothing is guided
	Failed   = "failed"   // it could not be solved
	Excluded = "excluded" // the sweep's keep leaves it out
)

// Missing is the guided count of a point where it is not known.
const Missing = -1

// MaxText is the longest text of a row in bytes; a longer one is cut.
const MaxText = 480

// Point is one point of a tile.
type Point struct {
	Values      []float64 // one for each of Physics.Parameters, in its order, SI, angles in radians; NaN is missing
	FrequencyHz float64   // 0 where it is not known
	Guided      int       // number of guided modes, or Missing
	State       string
	Reason      string
}

// Mode is one guided mode at one point, with the fields of solvers.Mode but its
// state; a float that has no meaning is NaN and becomes null.
type Mode struct {
	Family   string // exact where the solver knows it, empty where it must be followed
	Type     string // TE, TM, TEM, ...
	Symmetry string // exact label, empty where the section has no mirror plane

	Neff, Kappa       float64 // effective index is Neff - j Kappa
	Ng                float64 // group index
	GVD               float64 // s^2/m
	Beta3             float64 // s^3/m
	NeffErr, KappaErr float64 // bounds on the numerical error, as those below
	NgErr             float64
	GVDErr            float64 // s^2/m
	Beta3Err          float64 // s^3/m

	DNeff, DNg []float64 // with respect to each of Physics.Base, SI (per rad for angles)

	ExShare     float64
	Aeff        float64    // m^2
	Weff        float64    // m
	Confinement []float64  // share of axial power, in the order of column.Confinements
	Z           complex128 // ohm
	ZDefinition string     // empty: Z has no meaning
	Cutoff      float64    // Hz
	CPerM       float64    // F/m
	LPerM       float64    // H/m

	Reduced   bool        // from a reduced basis rather than a full solve
	Flags     []string    // near-cutoff, below-cutoff, approximate, ...
	Signature [16]float32 // field samples in section coordinates; all zero is none
}
