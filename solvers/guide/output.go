package guide

import (
	"math"
	"slices"

	"betaloom/solvers"
)

// nearCutoff is how close to the lowest guided index a mode is flagged.
const nearCutoff = 1e-5

// modes turns the answer into rows.
func (p *point) modes(answer []solved, at int) []solvers.Mode {
	next := &start{level: at, bounds: p.bounds, classes: map[string]warm{}}
	for i := range p.classes {
		next.classes[p.classes[i].label] = p.classes[i].start
	}
	if at > 0 && p.generous(answer) {
		next.level, next.classes = at-1, nil
	}
	out := make([]solvers.Mode, len(answer))
	for i := range answer {
		out[i] = p.mode(&answer[i])
		out[i].State = next
	}
	p.name(answer, out)
	return out
}

// generous says whether a coarser level would do as well.
func (p *point) generous(answer []solved) bool {
	const enough = 0.2 / step
	return p.short(answer) < enough
}

// mode fills one row.
func (p *point) mode(f *solved) solvers.Mode {
	nan := math.NaN()
	m := solvers.Mode{
		Symmetry: f.class.label,
		Neff:     f.neff(), Kappa: 0 - imag(f.beta.V)/p.k,
		Ng: f.ng(), GVD: real(f.beta.WW), Beta3: real(f.beta.WWW),
		NeffErr: f.bound.neff, KappaErr: f.bound.kappa, NgErr: f.bound.ng, GVDErr: f.bound.gvd, Beta3Err: f.bound.beta3,
		Weff: nan, Z: complex(nan, nan), Cutoff: nan, CPerM: nan, LPerM: nan,
	}
	p.sensitivities(f, &m)
	s := f.pencil.Shares(&f.pair, len(p.outline.Parts))
	m.ExShare, m.Aeff = s.ExShare, s.Aeff
	for _, n := range p.named {
		share := 0.0
		for i, part := range p.outline.Parts {
			if slices.Contains(n, part) {
				share += s.Parts[i]
			}
		}
		m.Confinement = append(m.Confinement, share)
	}
	if m.Neff-f.class.low < nearCutoff {
		m.Flags = append(m.Flags, "near-cutoff")
	}
	return m
}

// sensitivities turns derivatives of beta into those of the indices, with what a frequency that
// follows the parameters brings.
func (p *point) sensitivities(f *solved, m *solvers.Mode) {
	n := p.resolver.Params()
	m.DNeff, m.DNg = make([]float64, n), make([]float64, n)
	sweep := p.resolver.Sweep()
	for i := range n {
		if i < len(f.beta.P) {
			m.DNeff[i], m.DNg[i] = real(f.beta.P[i])/p.k, real(f.beta.WP[i])*lightSpeed
		}
		if i < len(sweep) {
			m.DNeff[i] += (m.Ng - m.Neff) / p.w * sweep[i]
			m.DNg[i] += lightSpeed * m.GVD * sweep[i]
		}
		if i < len(p.outline.Split) && p.outline.Split[i] {
			m.DNeff[i], m.DNg[i] = math.NaN(), math.NaN()
		}
	}
}
