package section

import (
	"slices"

	"betaloom/solvers"
	"betaloom/solvers/jet"
)

// medium gives the place of a material in the outline's Media. Materials
// with the same numbers in every derivative are one medium.
func (b *builder) medium(name string) (int, error) {
	if at, ok := b.media[name]; ok {
		return at, nil
	}
	eps, err := b.r.Medium(name)
	if err != nil {
		return 0, err
	}
	at := slices.IndexFunc(b.o.Media, func(m Medium) bool {
		return equal(&m.Eps[0], &eps[0]) && equal(&m.Eps[1], &eps[1]) && equal(&m.Eps[2], &eps[2])
	})
	if at < 0 {
		at = len(b.o.Media)
		b.o.Media = append(b.o.Media, Medium{Name: name, Eps: *eps})
	}
	b.media[name] = at
	return at, nil
}

// dielectric is medium for what may not be a metal.
func (b *builder) dielectric(where, name string) (int, error) {
	if b.metal(name) {
		return 0, &solvers.InputError{Where: where, Found: "the metal " + name, Expected: "a dielectric: a metal stands as a strip, a wall or a ground"}
	}
	return b.medium(name)
}

func equal(a, b *jet.Jet) bool {
	return a.V == b.V && a.W == b.W && a.WW == b.WW && a.WWW == b.WWW && equalList(a.P, b.P) && equalList(a.WP, b.WP)
}

// equalList takes nil for zeros.
func equalList(a, b []complex128) bool {
	for i := range max(len(a), len(b)) {
		var u, v complex128
		if a != nil {
			u = a[i]
		}
		if b != nil {
			v = b[i]
		}
		if u != v {
			return false
		}
	}
	return true
}
