package queue_test

import (
	"bytes"
	"encoding/json"
	"errors"
	"math"
	"reflect"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/schema/queue"
)

const run = "0197a1b2-0000-7000-8000-000000000001"

// tile is a small one with a parameter of each kind.
func tile(values ...float64) *schema.Tile {
	height := schema.Number{Parameter: "height"}
	index := schema.Number{Value: 1.45}
	return &schema.Tile{
		Physics: schema.Physics{
			Format: schema.FormatPhysics,
			Materials: map[string]schema.Material{
				"film": {Index: &schema.Number{Value: 2}}, "oxide": {Index: &index},
				"lab": {Table: &schema.Table{File: "lab.csv", WavelengthM: []float64{1e-6, 2e-6}, N: []float64{1.5, 1.4}}},
			},
			Parameters: []schema.Parameter{
				{Name: "wavelength", Kind: schema.Axis, Dimension: schema.Dimension{Length: 1}},
				{Name: "height", Kind: schema.Fixed, Dimension: schema.Dimension{Length: 1}, Value: 8e-7},
				{Name: "gap", Kind: schema.Derived, Dimension: schema.Dimension{Length: 1}, Expr: "0.25 * height + 20 nm"},
			},
			Section: schema.Section{Layers: &schema.Layers{Layers: []schema.Layer{
				{Material: "oxide"}, {Name: "core", Material: "film", Thickness: &height}, {Material: "lab"}}}},
			Equation: "auto", Modes: 2, Keep: "height > 1 nm && 1 < 2",
		},
		Axes: []schema.AxisBlock{{Parameter: "wavelength", Values: values}},
	}
}

func job(t testing.TB, ti *schema.Tile) *queue.Job {
	t.Helper()
	j, err := queue.NewJob(run, 0, ti)
	if err != nil {
		t.Fatal(err)
	}
	return j
}

func encode(t testing.TB, j *queue.Job) []byte {
	t.Helper()
	b, err := j.Encode()
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func TestJobRoundTrip(t *testing.T) {
	third, tiny := 1.0/3, math.SmallestNonzeroFloat64 // values that a short decimal would not give back
	rows := tile()
	rows.Axes, rows.Columns, rows.Rows = nil, []string{"wavelength"}, [][]float64{{1e-6}, {third}}
	point := tile()
	point.Axes, point.Physics.Parameters[0].Kind = nil, schema.Fixed
	for name, ti := range map[string]*schema.Tile{"box": tile(1e-6, third, tiny, math.MaxFloat64), "rows": rows, "one point": point} {
		t.Run(name, func(t *testing.T) {
			j := job(t, ti)
			got, err := queue.Decode(encode(t, j), run)
			if err != nil {
				t.Fatal(err)
			}
			if !reflect.DeepEqual(got, j) {
				t.Errorf("found %+v, expected %+v", got, j)
			}
		})
	}
}

// The id is the UUIDv5 of the message in the object-identifier namespace:
// SHA-1 over the namespace and the bytes, computed here with Python's uuid
// module, uuid.uuid5(uuid.NAMESPACE_OID, "betaloom").
func TestID(t *testing.T) {
	if got, want := queue.ID([]byte("betaloom")), "f5700d87-ee6c-5d4a-9234-f0215efdcd6a"; got != want {
		t.Errorf("found %s, expected %s", got, want)
	}
	a, b := job(t, tile(1e-6)), job(t, tile(1e-6))
	if queue.ID(encode(t, a)) != queue.ID(encode(t, b)) {
		t.Error("found two ids of one content")
	}
	b.Round = 1
	if queue.ID(encode(t, a)) == queue.ID(encode(t, b)) {
		t.Error("found one id for two rounds")
	}
}

func TestEncodeTooLarge(t *testing.T) {
	ti := tile(1e-6)
	lab := ti.Physics.Materials["lab"].Table
	for i := range 60_000 {
		lab.WavelengthM, lab.N = append(lab.WavelengthM, float64(i)+0.123456789), append(lab.N, 1.123456789)
	}
	if _, err := job(t, ti).Encode(); err == nil || !strings.Contains(err.Error(), "tables of its materials") {
		t.Errorf("found %v, expected an error that says what is too long", err)
	}
}

// spoil encodes a job after a change, with the name that the changed tile
// has: only the change is wrong.
func spoil(t *testing.T, change func(j *queue.Job)) []byte {
	t.Helper()
	j := job(t, tile(1e-6, 2e-6))
	change(j)
	name, err := j.Tile.Name()
	if err != nil {
		t.Fatal(err)
	}
	j.Name = name
	b, err := json.Marshal(j)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func TestDecodeRefuses(t *testing.T) {
	good := encode(t, job(t, tile(1e-6, 2e-6)))
	edit := func(old, new string) []byte {
		b := bytes.Replace(good, []byte(old), []byte(new), 1)
		if bytes.Equal(b, good) {
			t.Fatalf("%q is not in the message", old)
		}
		return b
	}
	cases := map[string]struct {
		message []byte
		says    string
	}{
		"nothing":            {nil, "no JSON object"},
		"not JSON":           {[]byte("take me to your leader"), "no JSON object"},
		"another JSON":       {[]byte(`[1, 2]`), "no JSON object"},
		"null":               {[]byte(`null`), "found format 0"},
		"empty object":       {[]byte(`{}`), "found format 0"},
		"cut off":            {good[:len(good)/2], "no JSON object"},
		"bytes after":        {append(bytes.Clone(good), " {}"...), "no JSON object"},
		"too large":          {append(bytes.Clone(good), bytes.Repeat([]byte(" "), queue.MaxJob)...), "at most 1048576"},
		"newer format":       {edit(`{"format":1`, `{"format":2`), "found format 2, expected 1"},
		"unknown field":      {edit(`{"format":1`, `{"colour":"red","format":1`), `unknown field "colour"`},
		"unknown field deep": {edit(`"equation":`, `"equatoin":"auto","equation":`), `unknown field "equatoin"`},
		"a text for a value": {edit(`"values":[`, `"values":["x",`), "no job"},
		"deep nesting":       {[]byte(strings.Repeat(`{"tile":`, 20_000)), "no JSON object"},
		"another run":        {edit(run, strings.Replace(run, "1", "2", 1)), "expected \"" + run},
		"another name":       {edit(`"name":"`, `"name":"0`), "the hash of the tile"},
		"changed physics":    {edit(`"modes":2`, `"modes":3`), "the hash of the tile"},
		"newer physics":      {spoil(t, func(j *queue.Job) { j.Tile.Physics.Format++ }), "physics of format 2, expected 1"},
		"axes and rows":      {spoil(t, func(j *queue.Job) { j.Tile.Rows = [][]float64{{1}} }), "both axes and rows"},
		"no values":          {spoil(t, func(j *queue.Job) { j.Tile.Axes[0].Values = nil }), "an axis \"wavelength\" of 0 values"},
		"axis missing":       {spoil(t, func(j *queue.Job) { j.Tile.Axes = nil }), "no values of \"wavelength\""},
		"axis twice":         {spoil(t, func(j *queue.Job) { j.Tile.Axes = append(j.Tile.Axes, j.Tile.Axes[0]) }), "\"wavelength\""},
		"unknown axis":       {spoil(t, func(j *queue.Job) { j.Tile.Axes[0].Parameter = "width" }), "values of \"width\""},
		"fixed as axis":      {spoil(t, func(j *queue.Job) { j.Tile.Axes[0].Parameter = "height" }), "values of \"height\""},
		"ragged rows": {spoil(t, func(j *queue.Job) {
			j.Tile.Axes, j.Tile.Columns, j.Tile.Rows = nil, []string{"wavelength"}, [][]float64{{1, 2}}
		}), "found 2 values in row 0"},
		"more points than memory": {spoil(t, func(j *queue.Job) {
			for range 20 {
				j.Tile.Axes = append(j.Tile.Axes, schema.AxisBlock{Parameter: "wavelength", Values: make([]float64, 1000)})
			}
		}), "expected 1 to 65536 points"},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			_, err := queue.Decode(c.message, run)
			var refused *queue.RefuseError
			if !errors.As(err, &refused) || !strings.Contains(refused.Reason, c.says) {
				t.Errorf("found %v, expected a refusal that says %q", err, c.says)
			}
		})
	}
}

func FuzzDecodeJob(f *testing.F) {
	f.Add(encode(f, job(f, tile(1e-6, 2e-6))))
	f.Add([]byte(`{"format":1,"run":"` + run + `","tile":{"physics":{"format":1}}}`))
	f.Add([]byte(`{"format":1,"tile":{"rows":[[]]}}`))
	f.Fuzz(func(t *testing.T, message []byte) {
		j, err := queue.Decode(message, run)
		var refused *queue.RefuseError
		if err != nil && !errors.As(err, &refused) {
			t.Fatalf("found %v, expected a refusal", err)
		}
		if err != nil {
			return
		}
		if n := j.Tile.Points(); n < 1 || n > queue.MaxPoints {
			t.Errorf("accepted a tile of %d points", n)
		}
		again, err := queue.Decode(encode(t, j), run)
		if err != nil || !reflect.DeepEqual(again, j) {
			t.Errorf("found %+v, %v on the way back, expected %+v", again, err, j)
		}
	})
}
