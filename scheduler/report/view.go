package report

import (
	"cmp"
	"slices"

	"betaloom/schema"
)

// axisForMap is the fewest values that an axis must have to become a side of
// a map or the abscissa of lines; one with fewer becomes panels.
const axisForMap = 5

// View says how the points of a sweep are laid out in pictures: which axis
// runs across, which up, and at which values of the further axes there is a
// panel. It also thins: a slot is a point of the sweep that is drawn.
type View struct {
	Axes    []schema.AxisBlock // of the sweep, file order
	X, Y    int                // indices into Axes; -1: none
	Further []int              // axes that run over panels
	Held    []int              // axes with a single value
	Panels  []Cell
	Xs, Ys  []float64 // values drawn, rising

	points int
	stride []int // by axis, in points
	takeX  []int // index along the axis -> place in Xs, -1 for none
	takeY  []int
	panel  map[int]int // sum of further index*stride -> panel
	every  []int       // points of a file that are drawn
	place  []int       // inverse of every, -1 for none
}

// Cell is a panel: the index along each further axis, in their order.
type Cell struct {
	Index []int
	Row   int // of the figure's grid of panels
}

// newBoxView lays out the points of a box.
func newBoxView(axes []schema.AxisBlock) *View {
	v := &View{Axes: axes, X: -1, Y: -1, points: 1, stride: make([]int, len(axes))}
	for a := len(axes) - 1; a >= 0; a-- {
		v.stride[a] = v.points
		v.points *= len(axes[a].Values)
	}
	v.chooseAxes()
	v.choosePanels()
	nx, ny := v.detail()
	v.Xs, v.takeX = v.sample(v.X, nx)
	v.Ys, v.takeY = v.sample(v.Y, ny)
	return v
}

// newRowsView lays out the points of a points file: every k-th of them.
func newRowsView(points int) *View {
	const most = 3000
	v := &View{X: -1, Y: -1, points: points, every: spread(points, most), place: nowhere(points)}
	for i, p := range v.every {
		v.place[p] = i
	}
	return v
}

// chooseAxes prefers the frequency across and the longest other axis up.
func (v *View) chooseAxes() {
	var moving []int
	for a, axis := range v.Axes {
		if len(axis.Values) > 1 {
			moving = append(moving, a)
		} else {
			v.Held = append(v.Held, a)
		}
	}
	slices.SortStableFunc(moving, func(a, b int) int {
		return cmp.Or(cmp.Compare(v.short(a), v.short(b)), cmp.Compare(v.notFrequency(a), v.notFrequency(b)),
			-cmp.Compare(len(v.Axes[a].Values), len(v.Axes[b].Values)))
	})
	if len(moving) > 0 {
		v.X, moving = moving[0], moving[1:]
	}
	if len(moving) > 0 && len(v.Axes[moving[0]].Values) >= axisForMap {
		v.Y, moving = moving[0], moving[1:]
	}
	slices.Sort(moving)
	v.Further = moving
}

func (v *View) short(a int) int {
	if len(v.Axes[a].Values) < axisForMap {
		return 1
	}
	return 0
}

func (v *View) notFrequency(a int) int {
	switch v.Axes[a].Parameter {
	case schema.Wavelength, schema.Frequency:
		return 0
	}
	return 1
}

// choosePanels takes the first, middle and last value of each further axis:
// all their combinations for up to two axes, for more one axis at a time with the
// others at their middle.
func (v *View) choosePanels() {
	v.panel = map[int]int{}
	switch len(v.Further) {
	case 0:
		v.addPanel(nil, 0)
	case 1:
		for _, i := range firstMiddleLast(v.length(0)) {
			v.addPanel([]int{i}, 0)
		}
	case 2:
		for row, i := range firstMiddleLast(v.length(0)) {
			for _, j := range firstMiddleLast(v.length(1)) {
				v.addPanel([]int{i, j}, row)
			}
		}
	default:
		v.oneAtATime()
	}
}

func (v *View) oneAtATime() {
	middle := make([]int, len(v.Further))
	for f := range middle {
		middle[f] = (v.length(f) - 1) / 2
	}
	for f := range v.Further {
		for _, i := range firstMiddleLast(v.length(f)) {
			index := slices.Clone(middle)
			index[f] = i
			v.addPanel(index, f)
		}
	}
}

func (v *View) length(further int) int { return len(v.Axes[v.Further[further]].Values) }

// addPanel adds a panel unless it is there already.
func (v *View) addPanel(index []int, row int) {
	key := 0
	for f, i := range index {
		key += i * v.stride[v.Further[f]]
	}
	if _, there := v.panel[key]; there {
		return
	}
	v.panel[key] = len(v.Panels)
	v.Panels = append(v.Panels, Cell{Index: index, Row: row})
}

func firstMiddleLast(n int) []int {
	return slices.Compact([]int{0, (n - 1) / 2, n - 1})
}

// detail is the most values drawn along x and y, so that all panels together
// stay near seventy thousand slots.
func (v *View) detail() (nx, ny int) {
	switch n := len(v.Panels); {
	case v.Y < 0:
		return max(200, 3000/n), 1
	case n == 1:
		return 260, 200
	case n <= 4:
		return 160, 120
	}
	return 100, 76
}

// sample picks at most most values along an axis, both ends among them.
func (v *View) sample(axis, most int) ([]float64, []int) {
	if axis < 0 {
		return []float64{0}, nil
	}
	all := v.Axes[axis].Values
	order := make([]int, len(all))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(i, j int) int { return cmp.Compare(all[i], all[j]) })
	var values []float64
	take := nowhere(len(all))
	for _, k := range spread(len(all), most) {
		take[order[k]] = len(values)
		values = append(values, all[order[k]])
	}
	return values, take
}

// spread gives at most most of the numbers 0..n-1, evenly, both ends among them.
func spread(n, most int) []int {
	m := min(n, most)
	out := make([]int, m)
	for i := range out {
		out[i] = i
		if m < n {
			out[i] = int(float64(i)*float64(n-1)/float64(m-1) + 0.5)
		}
	}
	return out
}

// nowhere is n places that are not set.
func nowhere(n int) []int {
	out := make([]int, n)
	for i := range out {
		out[i] = -1
	}
	return out
}

// IsBox reports whether the points are a product of axes.
func (v *View) IsBox() bool { return v.every == nil }

// Slots counts the slots.
func (v *View) Slots() int {
	if !v.IsBox() {
		return len(v.every)
	}
	return len(v.Panels) * len(v.Xs) * len(v.Ys)
}

// Thinned reports whether there are points in the panels' planes that are
// not drawn.
func (v *View) Thinned() bool {
	if !v.IsBox() {
		return len(v.every) < v.points
	}
	return v.X >= 0 && len(v.Xs) < len(v.Axes[v.X].Values) || v.Y >= 0 && len(v.Ys) < len(v.Axes[v.Y].Values)
}

// Panel is the panel that a point of a box lies in, -1 for none.
func (v *View) Panel(point int) int {
	if len(v.Further) == 0 {
		return 0
	}
	key := 0
	for _, a := range v.Further {
		key += v.along(point, a) * v.stride[a]
	}
	if p, ok := v.panel[key]; ok {
		return p
	}
	return -1
}

func (v *View) along(point, axis int) int {
	return point / v.stride[axis] % len(v.Axes[axis].Values)
}

// Slot is where a point of the sweep is drawn, -1 for nowhere.
func (v *View) Slot(point int) int {
	if !v.IsBox() {
		return v.place[point]
	}
	slot := v.Panel(point)
	if slot < 0 {
		return -1
	}
	for _, side := range []struct {
		axis int
		take []int
		n    int
	}{{v.Y, v.takeY, len(v.Ys)}, {v.X, v.takeX, len(v.Xs)}} {
		if side.axis < 0 {
			continue
		}
		i := side.take[v.along(point, side.axis)]
		if i < 0 {
			return -1
		}
		slot = slot*side.n + i
	}
	return slot
}

// InPanel cuts a panel's part from values by slot: rows of x, y rising.
func (v *View) InPanel(values []float64, panel int) []float64 {
	n := len(v.Xs) * len(v.Ys)
	return values[panel*n : (panel+1)*n]
}

// Values gives the value along each axis of a point of a box.
func (v *View) Values(point int) []float64 {
	out := make([]float64, len(v.Axes))
	for a := range v.Axes {
		out[a] = v.Axes[a].Values[v.along(point, a)]
	}
	return out
}
