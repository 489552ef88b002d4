package section

import (
	"testing"

	"betaloom/schema"
	"betaloom/solvers/resolve"
)

// BenchmarkMesh is one point of a sweep: a tilted strip, half the section,
// five parameters, from the resolver to the mesh with its derivatives.
func BenchmarkMesh(b *testing.B) {
	s := one(0.22*um, func(s *sketch) []schema.Strip { return list(s.strip(0, 0.5*um, 80, 80)) })
	r, err := resolve.New(&s.physics)
	if err != nil {
		b.Fatal(err)
	}
	half := options()
	half.HalfX = true
	b.ReportAllocs()
	for b.Loop() {
		if err := r.Set(s.point); err != nil {
			b.Fatal(err)
		}
		o, err := New(&s.physics, r)
		if err != nil {
			b.Fatal(err)
		}
		if _, err := o.Mesh(half); err != nil {
			b.Fatal(err)
		}
	}
}
