package worker

import (
	"slices"

	"betaloom/schema/part"
	"betaloom/solvers"
)

// convert appends the rows of modes to rows. They share the modes' memory.
func convert(rows []part.Mode, modes []solvers.Mode) []part.Mode {
	for i := range modes {
		rows = append(rows, row(&modes[i]))
	}
	return rows
}

// row is a mode without the state that its solver starts from.
func row(m *solvers.Mode) part.Mode {
	return part.Mode{
		Family: m.Family, Type: m.Type, Symmetry: m.Symmetry,
		Neff: m.Neff, Kappa: m.Kappa, Ng: m.Ng, GVD: m.GVD, Beta3: m.Beta3,
		NeffErr: m.NeffErr, KappaErr: m.KappaErr, NgErr: m.NgErr, GVDErr: m.GVDErr, Beta3Err: m.Beta3Err,
		DNeff: m.DNeff, DNg: m.DNg,
		ExShare: m.ExShare, Aeff: m.Aeff, Weff: m.Weff, Confinement: m.Confinement,
		Z: m.Z, ZDefinition: m.ZDefinition, Cutoff: m.Cutoff, CPerM: m.CPerM, LPerM: m.LPerM,
		Reduced: m.Reduced, Flags: m.Flags, Signature: m.Signature,
	}
}

// memory keeps the modes of a point after the solver has gone on to the
// next. Its slices are used again.
type memory struct {
	modes []solvers.Mode
}

func (k *memory) keep(modes []solvers.Mode) {
	kept := slices.Grow(k.modes[:0], len(modes))[:len(modes)]
	for i, m := range modes {
		old := kept[i]
		m.DNeff = append(old.DNeff[:0], m.DNeff...)
		m.DNg = append(old.DNg[:0], m.DNg...)
		m.Confinement = append(old.Confinement[:0], m.Confinement...)
		m.Flags = append(old.Flags[:0], m.Flags...)
		kept[i] = m
	}
	k.modes = kept
}
