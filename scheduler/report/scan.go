package report

import (
	"context"
	"fmt"
	"maps"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"betaloom/schema/column"
)

// batchRows is how many rows are in memory at a time.
const batchRows = 32768

// scan reads some columns of a table in order and calls visit with each
// batch; the batch's vectors stand in the order of names.
func scan(ctx context.Context, path string, names []string, visit func(b *column.Batch) error) (err error) {
	name := filepath.Base(path)
	in, err := os.Open(path)
	if err != nil {
		return err
	}
	defer in.Close()
	st, err := in.Stat()
	if err != nil {
		return err
	}
	f, err := column.Open(in, st.Size())
	if err != nil {
		return fmt.Errorf("%s: %w", name, err)
	}
	defer f.Close()
	wanted, at, err := pickColumns(f, names)
	if err != nil {
		return fmt.Errorf("%s: %w", name, err)
	}
	s, err := f.Scan(at)
	if err != nil {
		return fmt.Errorf("%s: %w", name, err)
	}
	b := column.NewBatch(wanted, nil, batchRows)
	for {
		if err := ctx.Err(); err != nil {
			return err
		}
		n, err := s.Next(b, batchRows)
		if err != nil {
			return fmt.Errorf("%s: %w", name, err)
		}
		if n == 0 {
			return nil
		}
		if err := visit(b); err != nil {
			return fmt.Errorf("%s: %w", name, err)
		}
	}
}

// kinds of the columns that are read; floats otherwise.
var textColumns = []string{"state", "reason", "family", "mode_type", "flag"}

func pickColumns(f *column.File, names []string) (wanted []column.Column, at []int, err error) {
	index := column.Index(f.Columns)
	for _, name := range names {
		i, ok := index[name]
		if !ok {
			return nil, nil, fmt.Errorf("found no column %s, expected one", name)
		}
		c := f.Columns[i]
		whole := name == "point" || name == "guided_count"
		text := slices.Contains(textColumns, name)
		if whole != (c.Type == column.Int64 || c.Type == column.Int32) || text != (c.Type == column.String) {
			return nil, nil, fmt.Errorf("column %s: found another type than expected", name)
		}
		wanted, at = append(wanted, c), append(at, i)
	}
	return wanted, at, nil
}

// mostReasons bounds how many different reasons are told apart, mostFailed
// how many failed points are marked in pictures.
const (
	mostReasons = 100
	mostFailed  = 500
	firstPoints = 3
)

// scanPoints counts the points by state, guided modes and reason.
func (d *Data) scanPoints(ctx context.Context, path string) error {
	reasons := map[[2]string]int{}
	return scan(ctx, path, []string{"point", "guided_count", "state", "reason"}, func(b *column.Batch) error {
		for i := range b.Rows {
			point := int(b.Vectors[0].Ints[i])
			if point < 0 || point >= d.Points {
				return fmt.Errorf("found point %d, expected 0 to %d", point, d.Points-1)
			}
			state := b.Text(2, i)
			d.addPoint(point, state, b.Vectors[1].Ints[i])
			if state != "solved" {
				d.addReason(reasons, state, b.Text(3, i), point)
			}
		}
		return nil
	})
}

func (d *Data) addPoint(point int, state string, guided int64) {
	d.States[state]++
	slot := d.View.Slot(point)
	counted := state == "solved" || state == "no-mode"
	if counted && guided != column.MissingInt {
		d.Guided[int(guided)]++
		if slot >= 0 {
			d.Count[slot] = float64(guided)
		}
	}
	if slot >= 0 {
		d.Excluded[slot] = state == "excluded"
	}
	if state == "failed" && d.View.IsBox() && len(d.Failed) < mostFailed && d.View.Panel(point) >= 0 {
		d.Failed = append(d.Failed, point)
	}
}

func (d *Data) addReason(seen map[[2]string]int, state, text string, point int) {
	if text == "" {
		text = "no reason is given"
	}
	key := [2]string{state, text}
	at, ok := seen[key]
	if !ok {
		if len(seen) >= mostReasons {
			key[1], text = "other reasons", "other reasons"
		}
		if at, ok = seen[key]; !ok {
			at = len(d.Reasons)
			seen[key] = at
			d.Reasons = append(d.Reasons, Reason{State: state, Text: text})
		}
	}
	r := &d.Reasons[at]
	r.N++
	if len(r.First) < firstPoints {
		r.First = append(r.First, point)
	}
}

// The columns of modes.parquet that the page needs, in this order.
var modeColumns = []string{"point", "family", "mode_type", "flag", "neff", "ng", "gvd_ps2_per_km",
	"neff_err", "ng_err", "gvd_err_ps2_per_km", "beta3_err_ps3_per_km", "kappa_err",
	"beta3_ps3_per_km", "kappa_eff", "loss_db_per_m"}

// mostFamilies bounds the families that are kept with their values; more
// are counted together.
const mostFamilies = 64

// scanModes takes the rows of all modes.
func (d *Data) scanModes(ctx context.Context, path string) error {
	m := &modeScan{d: d, families: map[string]*Family{}, flags: map[string]int{}}
	a := d.Physics.Accuracy
	for _, r := range []Reached{{Column: "neff_err", Asked: a.Neff}, {Column: "ng_err", Asked: a.Ng},
		{Column: "gvd_err_ps2_per_km", Unit: "ps²/km", Asked: a.GVDPs2PerKm}, {Column: "beta3_err_ps3_per_km", Unit: "ps³/km", Asked: a.Beta3Ps3PerKm}, {Column: "kappa_err"}} {
		m.reached = append(m.reached, &bounds{Reached: r, buckets: map[uint64]int{}})
	}
	if err := scan(ctx, path, modeColumns, m.batch); err != nil {
		return err
	}
	for _, b := range m.reached {
		if b.Column == "kappa_err" && b.Worst == 0 && b.Unbound == 0 {
			continue // no loss anywhere
		}
		b.Median = b.median()
		d.Reached = append(d.Reached, b.Reached)
	}
	for _, text := range slices.Sorted(maps.Keys(m.flags)) {
		d.Flags = append(d.Flags, Tally{text, m.flags[text]})
	}
	return nil
}

// modeScan is the state of one pass over modes.parquet.
type modeScan struct {
	d        *Data
	families map[string]*Family
	flags    map[string]int
	reached  []*bounds
}

func (m *modeScan) batch(b *column.Batch) error {
	f := func(c, row int) float64 { return b.Vectors[c].Floats[row] }
	for i := range b.Rows {
		point := int(b.Vectors[0].Ints[i])
		if point < 0 || point >= m.d.Points {
			return fmt.Errorf("found point %d, expected 0 to %d", point, m.d.Points-1)
		}
		m.d.ModeRows++
		values := [quantities]float64{f(4, i), f(5, i), f(6, i)}
		fam := m.family(b.Text(1, i), b.Text(2, i))
		fam.add(m.d.View.Slot(point), values, [quantities]float64{f(7, i), f(8, i), f(9, i)})
		fam.addLoss(f(14, i))
		for k, v := range [...]float64{f(4, i), f(5, i), f(6, i), f(12, i), f(13, i)} {
			m.reached[k].add(point, v, f(7+k, i))
		}
		if flags := b.Text(3, i); flags != "" {
			for _, flag := range strings.Split(flags, ";") {
				m.flags[strings.TrimSpace(flag)]++
			}
		}
	}
	return nil
}

func (m *modeScan) family(name, kind string) *Family {
	if name == "" {
		name = "not followed"
	}
	if f, ok := m.families[name]; ok {
		return f
	}
	if len(m.families) >= mostFamilies {
		name, kind = "further families", ""
		if f, ok := m.families[name]; ok {
			return f
		}
	}
	f := newFamily(name, kind, m.d.View.Slots())
	m.families[name] = f
	m.d.Families = append(m.d.Families, f)
	return f
}

// bounds gathers the bounds of one column.
type bounds struct {
	Reached
	buckets map[uint64]int // by the leading bits of the bound: within 0.4 %
}

// bucketBits are the trailing bits of a float64 that a bucket leaves open.
const bucketBits = 44

func (b *bounds) add(point int, value, bound float64) {
	if math.IsNaN(bound) {
		if !math.IsNaN(value) {
			b.Unbound++
		}
		return
	}
	if b.Rows == 0 || bound > b.Worst {
		b.Worst, b.At = bound, point
	}
	b.Rows++
	if b.Asked > 0 && bound > b.Asked {
		b.Above++
	}
	b.buckets[math.Float64bits(math.Abs(bound))>>bucketBits]++
}

// median is the middle of the bucket that holds it.
func (b *bounds) median() float64 {
	seen := 0
	for _, k := range slices.Sorted(maps.Keys(b.buckets)) {
		if seen += b.buckets[k]; 2*seen >= b.Rows {
			if k == 0 {
				return 0
			}
			return math.Float64frombits(k<<bucketBits | 1<<(bucketBits-1))
		}
	}
	return math.NaN()
}
