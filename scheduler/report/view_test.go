package report

import (
	"slices"
	"testing"

	"betaloom/schema"
)

func TestChooseAxes(t *testing.T) {
	few := schema.AxisBlock{Parameter: "wavelength", Values: linspace(1.5e-6, 1.6e-6, 2)}
	for _, c := range []struct {
		name    string
		axes    []schema.AxisBlock
		x, y    int
		further []int
		panels  int
	}{
		{"none", nil, -1, -1, nil, 1},
		{"frequency goes across", []schema.AxisBlock{heights(90), wavelengths(20)}, 1, 0, nil, 1},
		{"the longest goes up", []schema.AxisBlock{wavelengths(20), shifts(7), heights(8)}, 0, 2, []int{1}, 3},
		{"a short frequency becomes panels", []schema.AxisBlock{few, heights(30)}, 1, -1, []int{0}, 2},
		{"only short ones", []schema.AxisBlock{shifts(3), few}, 1, -1, []int{0}, 3},
		{"one value is held", []schema.AxisBlock{wavelengths(1), heights(30)}, 1, -1, nil, 1},
		{"two further", []schema.AxisBlock{wavelengths(9), heights(9), shifts(2), temperatures(5)}, 0, 1, []int{2, 3}, 6},
		{"three further", []schema.AxisBlock{wavelengths(9), heights(9), shifts(3), temperatures(3), {Parameter: "gap", Values: linspace(0, 1, 3)}}, 0, 1, []int{2, 3, 4}, 7},
	} {
		t.Run(c.name, func(t *testing.T) {
			v := newBoxView(c.axes)
			if v.X != c.x || v.Y != c.y || !slices.Equal(v.Further, c.further) || len(v.Panels) != c.panels {
				t.Errorf("across %d, up %d, further %v, %d panels; expected %d, %d, %v, %d", v.X, v.Y, v.Further, len(v.Panels), c.x, c.y, c.further, c.panels)
			}
		})
	}
}

// TestSlots checks every slot by the values that it stands for.
func TestSlots(t *testing.T) {
	falling := wavelengths(301)
	slices.Reverse(falling.Values)
	for name, axes := range map[string][]schema.AxisBlock{
		"one point":    nil,
		"one axis":     {wavelengths(7)},
		"thinned":      {falling, heights(250)},
		"three panels": {shifts(5), wavelengths(9), heights(6)},
		"nine panels":  {shifts(3), wavelengths(9), temperatures(4), heights(6)},
	} {
		t.Run(name, func(t *testing.T) {
			v := newBoxView(axes)
			seen := make([]int, v.Slots())
			for point := range v.points {
				s := v.Slot(point)
				if s < 0 {
					continue
				}
				seen[s]++
				v.checkSlot(t, s, point)
			}
			if slices.Min(seen) != 1 || slices.Max(seen) != 1 {
				t.Errorf("slots are taken %d to %d times, expected once", slices.Min(seen), slices.Max(seen))
			}
		})
	}
}

func (v *View) checkSlot(t *testing.T, slot, point int) {
	t.Helper()
	values := v.Values(point)
	nx, ny := len(v.Xs), len(v.Ys)
	if v.X >= 0 && values[v.X] != v.Xs[slot%nx] || v.Y >= 0 && values[v.Y] != v.Ys[slot/nx%ny] {
		t.Fatalf("point %d at %v is in slot %d", point, values, slot)
	}
	for f, i := range v.Panels[slot/nx/ny].Index {
		if a := v.Further[f]; values[a] != v.Axes[a].Values[i] {
			t.Fatalf("point %d at %v is in panel %d", point, values, slot/nx/ny)
		}
	}
}

func TestSpread(t *testing.T) {
	for n := 1; n < 40; n++ {
		for most := 2; most < 45; most++ {
			got := spread(n, most)
			if len(got) != min(n, most) || got[0] != 0 || got[len(got)-1] != n-1 && n > 1 || !slices.IsSorted(got) || len(slices.Compact(got)) != min(n, most) {
				t.Fatalf("spread(%d, %d) = %v", n, most, got)
			}
		}
	}
}
