package solvers

import "context"

// Q is a point: the angular frequency in rad/s, then the values of the base
// parameters (schema.Physics.Base) in SI units.
type Q []float64

// Problem is one section with its materials, ready to be solved at any
// point. A Problem keeps work space: it serves one goroutine at a time.
type Problem interface {
	// Modes finds the guided modes at q, at most want of them from the
	// highest Re neff down, ties by symmetry and then by family. near may
	// hold the modes of a neighbouring point to start from. Count is the number of all
	// guided modes, however many were asked for. The modes share the
	// Problem's work space and last until the next call. What was asked before
	// changes nothing: the same q, want and near give the same bits.
	Modes(ctx context.Context, q Q, want int, near []Mode) ([]Mode, Count, error)
}

// Count is the number of guided modes and what proves that none is missing.
type Count struct {
	N      int
	Proof  string // "node count", "argument principle", ...
	Reason string // why there is none, where N is 0
}

// Mode is one guided mode at one point. A float that has no meaning for
// this mode is NaN; it becomes null in a table.
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

	DNeff, DNg []float64 // with respect to each base parameter, SI (per rad for angles)

	ExShare     float64
	Aeff        float64    // m^2
	Weff        float64    // m
	Confinement []float64  // share of axial power, in the order of Physics' named layers and strips
	Z           complex128 // ohm
	ZDefinition string     // wave, line, power-voltage, power-current; empty: Z has no meaning
	Cutoff      float64    // Hz
	CPerM       float64    // F/m
	LPerM       float64    // H/m

	Reduced   bool        // from a reduced basis rather than a full solve
	Flags     []string    // near-cutoff, below-cutoff, approximate, ...
	Signature [16]float32 // field samples in section coordinates, unit norm, sign fixed

	State any // what the solver that made the mode starts from at a neighbouring point; nil where it starts from nothing
}
