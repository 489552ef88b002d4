package channel

import (
	"bufio"
	"encoding/json"
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"betaloom/solvers/section"
)

var python = flag.String("python", "", "a Python with SciPy, to solve the exported matrices with")

// exported is a pencil that a library solves, too.
type exported struct {
	name  string
	mesh  *section.Mesh
	eps   [][3]complex128
	low   float64 // effective index above which modes are compared; below the claddings' the walls make more of them
	least int     // modes there, at least, lest the comparison be empty
	large bool    // too large for QZ, which finds all eigenvalues
}

// exports are the pencils; those that only the library needs come with it.
func exports() []exported {
	lossy := [][3]complex128{{12 - 0.5i, 11 - 0.2i, 12.5 - 0.3i}, isotropic(2.1 - 0.01i)}
	list := []exported{
		{name: "quarter of the strip", mesh: stripMesh(3, 1, false), eps: stripEps, low: 1.2, least: 4},
		{name: "tilted walls", mesh: tiltedStrip(), eps: stripEps, low: 1.2, least: 6},
		{name: "tilted walls with loss", mesh: tiltedStrip(), eps: lossy, low: 1.2, least: 6},
		{name: "anisotropic", mesh: stripMesh(3, 1, false), eps: [][3]complex128{{11, 9, 6}, {2, 2.6, 1.7}}, low: 1.2, least: 4},
		{name: "metal guides, every mode twice", mesh: twins(), eps: [][3]complex128{isotropic(4)}, low: 0.5, least: 6},
		{name: "metal guide with a ridge", mesh: ridge(), eps: [][3]complex128{isotropic(4), {3, 6, 9}}, low: 0.5, least: 6},
	}
	if *python != "" {
		list = append(list, exported{name: "cells that shrink to the corner", mesh: stripMesh(5, 2, false), eps: stripEps, low: 1.3, least: 4, large: true})
	}
	return list
}

// tiltedStrip is half a strip 0.5 um wide below and 0.4 um above, on a coarse mesh.
func tiltedStrip() *section.Mesh {
	xs, ys := []float64{0, 0.17 * um, 0.25 * um, 0.35 * um, 0.9 * um, 1.9 * um}, []float64{-1.5 * um, -0.3 * um, 0, 0.22 * um, 0.5 * um, 1.6 * um}
	m := straightMesh(xs, ys, always(3), func(x, y float64) int {
		if x < 0.25*um && y > 0 && y < 0.22*um {
			return 0
		}
		return 1
	})
	for j := 3; j < len(ys); j++ {
		m.X[j][1], m.X[j][2] = m.X[j][1]-0.03*um, m.X[j][2]-0.05*um
	}
	return m
}

func twins() *section.Mesh {
	return straightMesh([]float64{0, 1.1 * um, 1.5 * um, 2.6 * um}, uniform(0.7*um, 2), always(6), func(x, y float64) int {
		if x > 1.1*um && x < 1.5*um {
			return section.Metal
		}
		return 0
	})
}

func ridge() *section.Mesh {
	return straightMesh(uniform(1.5*um, 3), uniform(0.9*um, 3), always(5), func(x, y float64) int {
		switch {
		case x > 0.5*um && x < um && y < 0.3*um:
			return section.Metal
		case y < 0.3*um:
			return 1
		}
		return 0
	})
}

// TestAgainstSciPy writes the matrices of some pencils to files. The files hold the same matrices, and the modes found here solve
// them. With
//
//	go test ./solvers/channel -run TestAgainstSciPy -args -python /usr/bin/python3
//
// SciPy solves them, too: LAPACK's QZ, which takes the whole matrices and knows nothing of modes, must find the same ones above
// the limit, no more and no less; of a larger pencil ARPACK with SuperLU the highest ones.
func TestAgainstSciPy(t *testing.T) {
	for _, c := range exports() {
		t.Run(c.name, func(t *testing.T) {
			p := pencil(t, c.mesh, stripK, c.eps...)
			pairs, count := modes(t, p, Options{Low: c.low})
			if len(pairs) < c.least || count.N != len(pairs) || count.Proof == "" {
				t.Fatalf("%d modes, %v, expected %d at least, all of them", len(pairs), count, c.least)
			}
			a, b := export(t, p)
			solvedBy(t, p, a, b, pairs)
			if *python != "" {
				k2 := stripK * stripK
				args := []string{a, b, fmt.Sprint(k2 * p.top), fmt.Sprint(len(pairs))}
				if !c.large {
					args = append(args, "--dense", "--above", fmt.Sprint(k2*c.low*c.low))
				}
				sameAs(t, ask(t, args...), pairs, !c.large)
			}
		})
	}
}

// export writes A and B and gives the files' names.
func export(t *testing.T, p *Pencil) (a, b string) {
	t.Helper()
	dir := t.TempDir()
	a, b = filepath.Join(dir, "A.mtx"), filepath.Join(dir, "B.mtx")
	for name, multiply := range map[string]func(dst, x []complex128){a: p.MulA, b: p.MulB} {
		if err := os.WriteFile(name, []byte(matrixMarket(p, multiply)), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	return a, b
}

// matrixMarket is a pencil's matrix in the Matrix Market exchange format (Boisvert, Pozo and Remington, NISTIR 5935, 1996), the
// lower triangle by columns.
func matrixMarket(p *Pencil, multiply func(dst, x []complex128)) string {
	var lines strings.Builder
	n, entries := p.t.unknowns, 0
	x, column := make([]complex128, n), make([]complex128, n)
	for j := range n {
		x[j] = 1
		multiply(column, x)
		x[j] = 0
		for i := j; i < n; i++ {
			if column[i] == 0 {
				continue
			}
			entries++
			fmt.Fprintf(&lines, "%d %d %.17g", i+1, j+1, real(column[i]))
			if !p.lossless {
				fmt.Fprintf(&lines, " %.17g", imag(column[i]))
			}
			lines.WriteByte('\n')
		}
	}
	kind := "complex"
	if p.lossless {
		kind = "real"
	}
	return fmt.Sprintf("%%%%MatrixMarket matrix coordinate %s symmetric\n%d %d %d\n%s", kind, n, n, entries, lines.String())
}

// element is one of a symmetric matrix, of its lower triangle.
type element struct {
	row, col int
	value    complex128
}

// imported reads a file that export wrote.
func imported(t *testing.T, name string) (n int, list []element) {
	t.Helper()
	file, err := os.Open(name)
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = file.Close() }()
	in := bufio.NewReader(file)
	head, err := in.ReadString('\n')
	if err != nil {
		t.Fatal(name, err)
	}
	var count int
	if _, err := fmt.Fscan(in, &n, new(int), &count); err != nil {
		t.Fatal(name, err)
	}
	for range count {
		var i, j int
		var re, im float64
		to := []any{&i, &j, &re}
		if strings.Contains(head, "complex") {
			to = append(to, &im)
		}
		if _, err := fmt.Fscan(in, to...); err != nil {
			t.Fatal(name, err)
		}
		list = append(list, element{i - 1, j - 1, complex(re, im)})
	}
	return n, list
}

// timesVector is the product of a symmetric matrix and a vector, and what rounding can make of each of its entries over the rounding unit:
// the sum of the terms' sizes.
func timesVector(list []element, x []complex128) (y []complex128, size []float64) {
	y, size = make([]complex128, len(x)), make([]float64, len(x))
	put := func(i, j int, v complex128) {
		y[i] += v * x[j]
		size[i] += abs(v * x[j])
	}
	for _, e := range list {
		put(e.row, e.col, e.value)
		if e.row != e.col {
			put(e.col, e.row, e.value)
		}
	}
	return y, size
}

// solvedBy checks that the files hold the pencil's matrices and that the modes' vectors solve them.
func solvedBy(t *testing.T, p *Pencil, fileA, fileB string, pairs []Pair) {
	t.Helper()
	n, a := imported(t, fileA)
	m, b := imported(t, fileB)
	if n != p.t.unknowns || m != n {
		t.Fatalf("matrices of %d and %d, want %d", n, m, p.t.unknowns)
	}
	rng := rand.New(rand.NewPCG(1, 2))
	x, want := make([]complex128, n), make([]complex128, n)
	for i := range x {
		x[i] = complex(rng.NormFloat64(), rng.NormFloat64())
	}
	for name, c := range map[string]struct {
		list     []element
		multiply func(dst, x []complex128)
	}{"A": {a, p.MulA}, "B": {b, p.MulB}} {
		c.multiply(want, x)
		got, size := timesVector(c.list, x)
		for i := range got {
			if !(abs(got[i]-want[i]) <= 1e-13*size[i]) { // rounding of some hundred terms
				t.Fatalf("%s: entry %d of the product is %g, want %g", name, i, got[i], want[i])
			}
		}
	}
	for k, m := range pairs {
		ax, sa := timesVector(a, m.X)
		bx, sb := timesVector(b, m.X)
		for i := range ax {
			if r := abs(ax[i] + m.L*bx[i]); !(r <= 1e-8*(slices.Max(sa)+abs(m.L)*slices.Max(sb))) { // the residual that modes grants
				t.Fatalf("mode %d: entry %d of F x is %g", k, i, r)
			}
		}
	}
}

// answer is what testdata/scipy/eigen.py prints.
type answer struct {
	Unknowns    int
	Above       struct{ Real, Complex, Negative int } // of QZ
	Eigenvalues []struct {
		Re       float64 `json:"l_real"`
		Im       float64 `json:"l_imag"`
		Residual float64
	}
}

// ask has the library find eigenvalues: the arguments of eigen.py.
func ask(t *testing.T, args ...string) (out answer) {
	t.Helper()
	cmd := exec.CommandContext(t.Context(), *python, append([]string{"testdata/scipy/eigen.py"}, args...)...)
	cmd.Stderr = os.Stderr
	text, err := cmd.Output()
	if err != nil {
		t.Fatalf("%s: %v", cmd, err)
	}
	if err := json.Unmarshal(text, &out); err != nil {
		t.Fatal(err)
	}
	return out
}

// sameAs compares the library's modes with ours: as many above the limit if it counted, and each L to 1e-11. Both are eigenvalues
// of the same matrices, so no discretisation comes in: the library's rounding is some 1e-16 of the largest L of the pencil, which the
// smallest cells make up to a hundred thousand times that of a mode, and ours, from the quotient x'Ax/x'Bx, is less.
func sameAs(t *testing.T, theirs answer, ours []Pair, counted bool) {
	t.Helper()
	if n := theirs.Above.Real + theirs.Above.Complex; counted && (n != len(ours) || theirs.Above.Negative != 0) {
		t.Fatalf("the library finds %d modes, %d of them backward; the proven count is %d", n, theirs.Above.Negative, len(ours))
	}
	if len(theirs.Eigenvalues) != len(ours) {
		t.Fatalf("the library lists %d eigenvalues, want %d", len(theirs.Eigenvalues), len(ours))
	}
	var left []complex128
	for _, e := range theirs.Eigenvalues {
		left = append(left, complex(e.Re, e.Im))
	}
	worst := 0.0
	for i, m := range ours {
		j, d := 0, math.Inf(1)
		for k, l := range left {
			if v := abs(l - m.L); v < d {
				j, d = k, v
			}
		}
		left = slices.Delete(left, j, j+1) // each of theirs serves once
		worst = max(worst, d/abs(m.L))
		if !(d <= 1e-11*abs(m.L)) {
			t.Errorf("mode %d: L = %.15g, the library's nearest is off by %.1e of it", i, m.L, d/abs(m.L))
		}
	}
	t.Logf("%d unknowns, %d modes, farthest apart by %.1e of L", theirs.Unknowns, len(ours), worst)
}
