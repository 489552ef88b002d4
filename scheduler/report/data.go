package report

import (
	"math"

	"betaloom/schema"
)

// Data is all that a page shows, gathered from a run's folder.
type Data struct {
	Name     string
	Physics  schema.Physics
	Axes     []schema.AxisBlock // of a box; empty for a points file
	Columns  []string           // the parameters in a points file
	Equation Equation
	Points   int // of the sweep, excluded ones included
	View     *View

	States   map[string]int // points by state
	Guided   map[int]int    // points by guided_count
	Reasons  []Reason       // why points were not solved, most frequent first
	Count    []float64      // guided_count by slot, NaN where not solved
	Excluded []bool         // by slot
	Failed   []int          // the first failed points inside panels
	Rows     [][]float64    // of a points file: parameter values in the order of Columns, SI

	Families []*Family // by falling highest neff
	Reached  []Reached // accuracy, by column
	Flags    []Tally   // rows by flag
	ModeRows int
	Zeros    []Zero // of the group-velocity dispersion
	Ups      []int  // the rows upward, as indices into View.Ys, in which zeros were looked for

	Cost  []Fact
	Files []File
}

// Equation is what was solved and why.
type Equation struct {
	Name    string
	Reasons []string
}

// Fact is one line of a small table.
type Fact struct{ Name, Value string }

// File is a file of the run's folder.
type File struct {
	Name, What string
	Bytes      int64
}

// Tally is how many rows carry a text.
type Tally struct {
	Text string
	N    int
}

// Reason is why points in a state are there.
type Reason struct {
	State, Text string
	N           int
	First       []int // the first few points
}

// Quantity is one of the pictured columns.
type Quantity int

// The pictured columns.
const (
	Neff Quantity = iota
	Ng
	GVD
	quantities
)

// Family is a followed mode over the slots of a View.
type Family struct {
	Name   string
	Type   string
	Rows   int                   // over the whole sweep
	Range  [quantities]span      // over the whole sweep
	Worst  [quantities]float64   // bound, over the whole sweep
	Loss   span                  // dB/m, over the whole sweep
	Values [quantities][]float64 // by slot, NaN where absent; GVD in ps^2/km
	Errs   [quantities][]float64 // bounds
}

// Reached is the accuracy of one column over all rows.
type Reached struct {
	Column  string
	Unit    string
	Asked   float64 // 0: not asked
	Worst   float64
	At      int // a point of the worst
	Median  float64
	Above   int // rows whose bound is above what was asked
	Rows    int // rows with a bound
	Unbound int // rows with a value but without a bound
}

// Zero is a place where a family's group-velocity dispersion vanishes,
// along the axis drawn across.
type Zero struct {
	Family string
	Panel  int
	Y      int // index into View.Ys
	X, Err float64
}

func newFamily(name, kind string, slots int) *Family {
	f := &Family{Name: name, Type: kind, Loss: span{math.Inf(1), math.Inf(-1)}}
	for q := range quantities {
		f.Range[q] = span{math.Inf(1), math.Inf(-1)}
		f.Values[q], f.Errs[q] = make([]float64, slots), make([]float64, slots)
		for i := range slots {
			f.Values[q][i], f.Errs[q][i] = math.NaN(), math.NaN()
		}
	}
	return f
}

// addLoss takes the loss of one row, NaN where it has none.
func (f *Family) addLoss(v float64) {
	if !math.IsNaN(v) {
		f.Loss = span{min(f.Loss.Lo, v), max(f.Loss.Hi, v)}
	}
}

// add takes one row; slot is -1 for a point that is not drawn.
func (f *Family) add(slot int, values, errs [quantities]float64) {
	f.Rows++
	for q, v := range values {
		if math.IsNaN(v) {
			continue
		}
		f.Range[q] = span{min(f.Range[q].Lo, v), max(f.Range[q].Hi, v)}
		if errs[q] > f.Worst[q] {
			f.Worst[q] = errs[q]
		}
		if slot >= 0 {
			f.Values[q][slot], f.Errs[q][slot] = v, errs[q]
		}
	}
}
