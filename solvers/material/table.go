package material

import (
	"fmt"
	"math"

	"betaloom/schema"
	"betaloom/solvers/jet"
	"betaloom/solvers/material/internal/smooth"
)

// table is a fitted table: n and k over the logarithm of the wavelength.
type table struct {
	band band
	n, k *smooth.Fit // k is nil where there is no loss
	loss bool        // no row of k is negative
}

func (*table) squared() bool { return false }

// set gives z the fit n - jk. Where the fit to k dips below zero though no
// row does, the material is taken as lossless rather than as amplifying.
func (t *table) set(z *jet.Jet, p point) *fault {
	l := min(max(p.wavelength(), t.band.lo), t.band.hi)
	addFit(z, 1, t.n.At(math.Log(l)), p.w)
	if t.k == nil {
		return nil
	}
	if k := t.k.At(math.Log(l)); k[0] >= 0 || !t.loss {
		addFit(z, -1i, k, p.w)
	}
	return nil
}

// addFit adds c f(log L) to z. As log L is a constant less log w, its
// derivatives in w are -1/w, 1/w^2 and -2/w^3.
func addFit(z *jet.Jet, c complex128, f [4]float64, w float64) {
	r := 1 / w
	z.V += c * complex(f[0], 0)
	z.W += c * complex(-f[1]*r, 0)
	z.WW += c * complex((f[2]+f[1])*r*r, 0)
	z.WWW += c * complex(-(f[3]+3*f[2]+2*f[1])*r*r*r, 0)
}

// fitTable checks a table and fits it.
func fitTable(s *schema.Table) (*table, Residual, *fault) {
	if f := checkTable(s); f != nil {
		f.found = "table " + s.File + ": " + f.found
		return nil, Residual{}, f
	}
	x := make([]float64, len(s.WavelengthM))
	for i, l := range s.WavelengthM {
		x[i] = math.Log(l)
	}
	t := &table{band: band{s.WavelengthM[0], s.WavelengthM[len(x)-1]}, loss: true}
	var res Residual
	var err error
	if t.n, err = smooth.New(x, s.N); err != nil {
		return nil, res, &fault{"table " + s.File + ": " + err.Error(), "rows that can be fitted"}
	}
	res.RMSN, res.MaxN = t.n.RMS(), t.n.Max()
	empty := true
	for _, k := range s.K {
		empty = empty && k == 0
		t.loss = t.loss && k >= 0
	}
	if empty {
		return t, res, nil
	}
	if t.k, err = smooth.New(x, s.K); err != nil {
		return nil, res, &fault{"table " + s.File + ": k: " + err.Error(), "rows that can be fitted"}
	}
	res.RMSK, res.MaxK = t.k.RMS(), t.k.Max()
	return t, res, nil
}

// checkTable says what is wrong with the rows of a table.
func checkTable(s *schema.Table) *fault {
	rows := len(s.WavelengthM)
	switch {
	case rows < 2:
		return &fault{fmt.Sprintf("%d rows", rows), "two or more"}
	case len(s.N) != rows || s.K != nil && len(s.K) != rows:
		return &fault{fmt.Sprintf("%d wavelengths, %d n, %d k", rows, len(s.N), len(s.K)), "as many of each"}
	}
	for i, l := range s.WavelengthM {
		switch {
		case !positive(l):
			return found(fmt.Sprintf("wavelength of row %d of", i+1), l, "above 0 m")
		case i > 0 && l <= s.WavelengthM[i-1]:
			return &fault{fmt.Sprintf("wavelength %s of row %d after %s", micrometres(l), i+1, micrometres(s.WavelengthM[i-1])),
				"wavelengths that rise from row to row"}
		case !positive(s.N[i]):
			return found(fmt.Sprintf("n of row %d of", i+1), s.N[i], "above 0")
		case s.K != nil && (math.IsNaN(s.K[i]) || math.IsInf(s.K[i], 0)):
			return found(fmt.Sprintf("k of row %d of", i+1), s.K[i], "a finite number")
		}
	}
	return nil
}
