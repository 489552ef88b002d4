package ldl

import (
	"fmt"
	"hash/fnv"
	"io"
	"math/rand/v2"
	"os"
	"os/exec"
	"strings"
	"testing"
)

// TestMain prints the bits instead of testing where TestSameBits asks for them.
func TestMain(m *testing.M) {
	if os.Getenv("LDL_BITS") != "" {
		fmt.Println(bits())
		return
	}
	os.Exit(m.Run())
}

// With fewer of the processor's instructions everything comes out with the same bits.
func TestSameBits(t *testing.T) {
	want := bits()
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	for _, off := range []string{"cpu.avx512f=off", "cpu.avx512f=off,cpu.avx2=off"} {
		t.Run(off, func(t *testing.T) {
			cmd := exec.Command(self)
			cmd.Env = append(os.Environ(), "LDL_BITS=1", "GODEBUG="+off)
			out, err := cmd.Output()
			if err != nil {
				t.Fatal(err)
			}
			if got := strings.TrimSpace(string(out)); got != want {
				t.Errorf("the bits are %s, with all instructions %s", got, want)
			}
		})
	}
}

// bits is a hash of what many fronts and solutions come to.
func bits() string {
	h := fnv.New64a()
	for n := 1; n < 60; n += 4 {
		for s := 1; s <= n; s += 1 + n/6 {
			put(h, n, s, func(x, _ float64) float64 { return x })
			put(h, n, s, func(x, y float64) complex128 { return complex(x, y) })
		}
	}
	return fmt.Sprintf("%x", h.Sum64())
}

func put[T Number](h io.Writer, n, s int, one func(x, y float64) T) {
	rng := rand.New(rand.NewPCG(uint64(n), uint64(s)))
	re, im := random(rng, n), random(rng, n)
	re.SetSym(0, 0, 1)
	f, rest := split(n, s, func(i, j int) T { return one(re.At(i, j), im.At(i, j)) })
	g, err := f.Eliminate(rest, make([]T, (n+2)*s))
	fmt.Fprint(h, g, err, f.Perm, f.Off)
	for i := range n {
		fmt.Fprint(h, f.Panel[i*s:i*s+min(i+1, s)])
	}
	for i := range n - s {
		fmt.Fprint(h, rest[i*(n-s):i*(n-s)+i+1])
	}
	x, work := make([]T, 3*n), make([]T, 4*n)
	for i := range x {
		x[i] = one(rng.NormFloat64(), rng.NormFloat64())
	}
	f.Down(x[:s], x[s:n], work)
	f.Up(x[:s], x[s:n], work)
	fmt.Fprint(h, x)
}
