package sweep

import (
	"fmt"
	"math"
	"regexp"
	"strings"

	"gonum.org/v1/gonum/mat"

	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/quantity"
)

// checkWindows checks what windows say of columns, axes and families.
func (c *checker) checkWindows() {
	columns := map[string]column.Column{}
	var numeric []string
	for _, f := range append(column.Points(&c.physics), column.Modes(&c.physics)...) {
		if columns[f.Name].Name == "" && f.Type != column.String && f.Type != column.Bytes {
			numeric = append(numeric, f.Name)
		}
		columns[f.Name] = f
	}
	c.checkQuantities()
	seen := map[string]bool{}
	for i := range c.raw.windows {
		w, path := &c.raw.windows[i], index("windows", i)
		if w.Name != "" && seen[w.Name] {
			c.fault(path+".name", "the name "+w.Name+" again", "another name for this window")
		}
		seen[w.Name] = true
		c.checkFamily(path, w.Family)
		c.checkRequire(path+".require", w.Require, columns, numeric)
		c.checkTolerance(path+".tolerance", w)
	}
}

var slabFamily = regexp.MustCompile(`^T[EM][0-9]+$`)

// checkFamily checks the name of a family as far as the section tells.
func (c *checker) checkFamily(path, family string) {
	l := c.physics.Section.Layers
	if family == "" || l == nil || l.WallsWidth != nil {
		return
	}
	for _, layer := range l.Layers {
		if len(layer.Strips) > 0 {
			return
		}
	}
	if !slabFamily.MatchString(family) {
		c.fault(path+".family", "the family "+family, "for layers without strips one such as TE0 or TM1")
	}
}

func (c *checker) checkRequire(path string, all []Requirement, columns map[string]column.Column, numeric []string) {
	for i, q := range all {
		at := index(path, i)
		c.checkRequire(at+".any", q.Any, columns, numeric)
		if f, ok := columns[q.Column]; q.Column != "" && c.settled() {
			switch {
			case !ok:
				c.fault(at+".column", "the unknown column "+quote(q.Column), "a numeric column of the tables"+c.hint(q.Column, numeric))
			case f.Type == column.String || f.Type == column.Bytes:
				c.fault(at+".column", "the column "+q.Column+", which holds text", "a numeric column of the tables")
			}
		}
		for _, s := range q.For {
			c.checkStretch(join(at+".for", s.Parameter), s)
		}
	}
}

// checkStretch checks that a stretch lies on an axis.
func (c *checker) checkStretch(path string, s Stretch) {
	p := c.parameters[s.Parameter]
	switch {
	case p == nil && !c.whole():
		return
	case p == nil:
		c.fault(path, "the unknown name "+quote(s.Parameter), "an axis of the sweep"+c.hint(s.Parameter, c.order))
		return
	case p.v.kind != schema.Axis || p.column:
		c.fault(path, s.Parameter+", which is no axis", "an axis of the sweep")
		return
	case p.broken || c.odd[path] || math.IsNaN(s.Lo) || math.IsNaN(s.Hi):
		return
	}
	if s.Lo > s.Hi {
		c.fault(path, "a stretch from its upper end", "the lower end first")
		return
	}
	lo, hi := p.v.ends()
	const near = 1e-9
	slack := near * max(math.Abs(lo), math.Abs(hi))
	if s.Lo < lo-slack || s.Hi > hi+slack {
		c.fault(path, fmt.Sprintf("a stretch from %s to %s", quantity.Format(s.Lo, p.dim), quantity.Format(s.Hi, p.dim)),
			fmt.Sprintf("one within the axis, from %s to %s", quantity.Format(lo, p.dim), quantity.Format(hi, p.dim)))
	}
}

// checkQuantities checks the dimensions of stretches and tolerances.
func (c *checker) checkQuantities() {
	for _, q := range c.quantities {
		p := c.parameters[q.parameter]
		switch {
		case p == nil || p.broken:
		case p.dim != q.q.dim:
			c.fault(q.q.path, quote(q.q.text)+", "+quantity.Describe(q.q.dim), quantity.Describe(p.dim)+", as "+p.name+" is")
			above, _, _ := strings.Cut(q.q.path, "."+p.name+"[")
			c.odd[join(above, p.name)] = true
		case q.difference && q.q.absolute():
			c.fault(q.q.path, quote(q.q.text)+", an absolute temperature", "a difference in K")
		}
	}
}

// checkTolerance checks that what has a tolerance is a base parameter, and
// that the correlations belong together.
func (c *checker) checkTolerance(path string, w *Window) {
	under := map[string]bool{}
	for _, q := range w.Require {
		for _, s := range append(q.For, stretches(q.Any)...) {
			under[s.Parameter] = true
		}
	}
	if n := len(w.Tolerance); n > MaxTolerance {
		c.fault(path, fmt.Sprintf("%d parameters with a tolerance", n), fmt.Sprintf("at most %d", MaxTolerance))
		return
	}
	at := map[string]int{}
	for i, t := range w.Tolerance {
		at[t.Parameter] = i
		p, where := c.parameters[t.Parameter], join(path, t.Parameter)
		switch {
		case p == nil && !c.whole():
		case p == nil:
			c.fault(where, "the unknown name "+quote(t.Parameter), "a parameter"+c.hint(t.Parameter, c.order))
		case p.v.kind == schema.Derived || t.Parameter == schema.Wavelength || t.Parameter == schema.Frequency:
			c.fault(where, "a tolerance of "+t.Parameter, "a tolerance of a fixed parameter or an axis, other than wavelength and frequency")
		case under[t.Parameter]:
			c.fault(where, "a tolerance of "+t.Parameter+", which stands under for", "one or the other")
		}
	}
	c.checkCorrelations(path+"."+correlationKey, w, at)
}

func stretches(all []Requirement) []Stretch {
	var list []Stretch
	for _, q := range all {
		list = append(list, q.For...)
	}
	return list
}

// checkCorrelations checks that correlations name toleranced parameters, each
// pair once, and that there can be such variables: their matrix is positive
// definite.
func (c *checker) checkCorrelations(path string, w *Window, at map[string]int) {
	if len(w.Correlate) == 0 || len(at) == 0 {
		c.lonely(path, w)
		return
	}
	m := mat.NewSymDense(len(at), nil)
	for i := range len(at) {
		m.SetSym(i, i, 1)
	}
	seen := map[[2]int]bool{}
	ok := true
	for k, r := range w.Correlate {
		i, okA := at[r.A]
		j, okB := at[r.B]
		where := index(path, k)
		switch {
		case r.A == "" || r.B == "" || math.IsNaN(r.Rho):
			ok = false
			continue
		case !okA || !okB:
			c.fault(where, "a correlation of "+quote(strings.Join(missing(at, r.A, r.B), " and ")), "parameters with a tolerance in this window")
		case i == j:
			c.fault(where, "a correlation of "+r.A+" with itself", "two parameters")
		case seen[[2]int{min(i, j), max(i, j)}]:
			c.fault(where, "a correlation of "+r.A+" and "+r.B+" again", "each pair once")
		default:
			seen[[2]int{min(i, j), max(i, j)}] = true
			m.SetSym(i, j, r.Rho)
			continue
		}
		ok = false
	}
	var f mat.Cholesky
	if ok && !f.Factorize(m) {
		c.fault(path, "correlations that no variables can have together", "a positive definite matrix of coefficients")
	}
}

// lonely reports correlations in a window without tolerances.
func (c *checker) lonely(path string, w *Window) {
	if len(w.Correlate) > 0 {
		c.fault(path, "correlations without tolerances", "tolerances of the parameters they name")
	}
}

func missing(at map[string]int, names ...string) []string {
	var all []string
	for _, n := range names {
		if _, ok := at[n]; !ok {
			all = append(all, n)
		}
	}
	return all
}
