package guide

import (
	"context"
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"sort"
	"sync"
	"testing"
	"time"

	"betaloom/schema"
	"betaloom/solvers"
)

var (
	campaign     = flag.Int("campaign", 12, "random sections to solve; the full campaign is 10000")
	campaignSeed = flag.Uint64("campaign-seed", 20261201, "seed of the random sections")
	campaignFine = flag.Int("campaign-check", 4, "of every so many sections one is solved again at a tighter accuracy")
)

// randomSection is a valid section: one to three strips of indices from 1 to 4 with walls from 60 to 90 degrees, on a layer or
// none, between half-spaces.
func randomSection(rng *rand.Rand) *schema.Physics {
	length := func(v float64) *schema.Number { return &schema.Number{Value: v} }
	index := func() schema.Material { return schema.Material{Index: length(1 + 3*rng.Float64())} }
	log := func(low, high float64) float64 { return um * low * math.Pow(high/low, rng.Float64()) }
	p := &schema.Physics{
		Format: schema.FormatPhysics, Equation: "auto", Modes: 4, Accuracy: schema.Accuracy{Neff: 1e-5},
		Materials:  map[string]schema.Material{"below": index(), "above": index(), "slab": index()},
		Parameters: []schema.Parameter{{Name: "wavelength", Kind: schema.Axis, Dimension: schema.Dimension{Length: 1}}},
	}
	l := &schema.Layers{Layers: []schema.Layer{{Material: "below"}}}
	if rng.IntN(3) == 0 {
		l.Layers = append(l.Layers, schema.Layer{Material: "slab", Thickness: length(log(0.03, 0.5))})
	}
	height := log(0.08, 2)
	core := schema.Layer{Name: "core", Thickness: length(height), Fill: "above"}
	at := 0.0
	for i := range 1 + rng.IntN(3) {
		name := fmt.Sprintf("core%d", i)
		p.Materials[name] = index()
		left, right := math.Pi/180*(60+30*rng.Float64()), math.Pi/180*(60+30*rng.Float64())
		if rng.IntN(3) == 0 {
			right = left
		}
		if rng.IntN(4) == 0 {
			left, right = math.Pi/2, math.Pi/2
		}
		width := log(0.1, 2.5)
		at += height / math.Tan(left)
		core.Strips = append(core.Strips, schema.Strip{
			Material: name, Centre: schema.Number{Value: at + width/2}, Width: schema.Number{Value: width},
			SidewallLeft: &schema.Number{Value: left}, SidewallRight: &schema.Number{Value: right},
		})
		at += width + height/math.Tan(right) + log(0.05, 1)
	}
	core.Material = "core0"
	l.Layers = append(l.Layers, core, schema.Layer{Material: "above"})
	p.Section.Layers = l
	top := max(p.Materials["below"].Index.Value, p.Materials["above"].Index.Value)
	for i := range core.Strips { // two in three guide, often
		if rng.IntN(3) > 0 {
			p.Materials[core.Strips[i].Material] = schema.Material{Index: length(top + (4-top)*rng.Float64())}
		}
	}
	return p
}

// verdict is what became of one section.
type verdict struct {
	number        int
	err           error
	seconds       float64
	modes, census int
	inaccurate    bool
	ratios        [4][]float64 // |error| over bound of neff, ng, GVD and beta3
	loose         [4][]float64 // bound over |error|, where this is not below the reference's own bound
}

// judge solves one section and, where asked, checks its bounds by a solve at a tighter accuracy.
func judge(number int, check bool) (v verdict) {
	v.number = number
	rng := rand.New(rand.NewPCG(*campaignSeed, uint64(number)))
	p := randomSection(rng)
	q := solvers.Q{frequency(1.55 * um)}
	begin := time.Now()
	g, err := New(p)
	if err != nil {
		v.err = err
		return v
	}
	modes, count, err := g.Modes(context.Background(), q, p.Modes, nil)
	v.seconds, v.modes, v.census, v.err = time.Since(begin).Seconds(), len(modes), count.N, err
	for _, m := range modes {
		v.inaccurate = v.inaccurate || !(m.NeffErr <= p.Accuracy.Neff)
	}
	if err != nil || !check || len(modes) == 0 {
		return v
	}
	p.Accuracy.Neff = 1e-8
	g, err = New(p)
	if err != nil {
		v.err = err
		return v
	}
	fine, _, err := g.Modes(context.Background(), q, p.Modes, nil)
	if err != nil || len(fine) != len(modes) {
		v.err = fmt.Errorf("%d modes, %d at a tighter accuracy: %v", len(modes), len(fine), err)
		return v
	}
	for i := range modes {
		a, b := &modes[i], &fine[i]
		v.compare(0, a.Neff-b.Neff, a.NeffErr, b.NeffErr)
		v.compare(1, a.Ng-b.Ng, a.NgErr, b.NgErr)
		v.compare(2, a.GVD-b.GVD, a.GVDErr, b.GVDErr)
		v.compare(3, a.Beta3-b.Beta3, a.Beta3Err, b.Beta3Err)
	}
	return v
}

func (v *verdict) compare(what int, d, bound, reference float64) {
	d = math.Abs(d)
	v.ratios[what] = append(v.ratios[what], (d-reference)/bound)
	if d > 3*reference {
		v.loose[what] = append(v.loose[what], bound/d)
	}
}

// TestCampaign solves random sections: all are to be solved, 99 % as accurately as asked, and every bound is to hold in
// the sample that is solved again.
func TestCampaign(t *testing.T) {
	results := make([]verdict, *campaign)
	var wait sync.WaitGroup
	next := make(chan int)
	for range runtime.GOMAXPROCS(0) {
		wait.Go(func() {
			for i := range next {
				results[i] = judge(i, i%*campaignFine == 0)
			}
		})
	}
	for i := range results {
		next <- i
	}
	close(next)
	wait.Wait()
	short := 0
	var all, loose [4][]float64
	worst := 0.0
	total := 0.0
	guided := 0
	for _, v := range results {
		if v.err != nil {
			t.Errorf("section %d: %v", v.number, v.err)
		}
		if v.inaccurate {
			short++
		}
		if v.census > 0 {
			guided++
		}
		worst, total = max(worst, v.seconds), total+v.seconds
		for i := range all {
			all[i], loose[i] = append(all[i], v.ratios[i]...), append(loose[i], v.loose[i]...)
			for _, r := range v.ratios[i] {
				if r > 1 {
					t.Errorf("section %d: error of %s is %.2f of its bound", v.number, numbers[i], r)
				}
			}
		}
	}
	if 100*short > *campaign {
		t.Errorf("%d of %d sections are less accurate than asked", short, *campaign)
	}
	t.Logf("%d sections, %d with guided modes, %d less accurate than asked; longest %.1f s, mean %.2f s", *campaign, guided, short, worst, total/float64(*campaign))
	for i, name := range numbers {
		t.Logf("%s: error/bound worst %.2f of %d; bound/error median %.0f, 95 %% %.0f, largest %.0f", name, share(all[i], 1), len(all[i]), share(loose[i], 0.5), share(loose[i], 0.95), share(loose[i], 1))
	}
}

var numbers = [4]string{"neff", "ng", "GVD", "beta3"}

// share is the value that a share of the list does not exceed.
func share(list []float64, s float64) float64 {
	if len(list) == 0 {
		return math.NaN()
	}
	sort.Float64s(list)
	return list[min(int(s*float64(len(list))), len(list)-1)]
}
