package table

import (
	"testing"

	"betaloom/schema/column"
)

// FuzzWhere finds no condition that panics or that moves what follows a text.
func FuzzWhere(f *testing.F) {
	for _, s := range []string{`family == "TE0" and ng > 2`, `"`, `family==""or family!=''`, "z0 == 1", `ng == "`, "not (ng < 3)"} {
		f.Add(s)
	}
	columns := []column.Column{{Name: "ng", Type: column.Float64}, {Name: "z0", Type: column.Float64}, {Name: "family", Type: column.String}}
	f.Fuzz(func(t *testing.T, where string) {
		q := filter{types: map[string]column.Type{}, stands: map[string]int{}}
		for _, c := range columns {
			q.types[c.Name] = c.Type
		}
		if numeric, err := q.takeTexts(where); err == nil && len(numeric) != len(where) {
			t.Errorf("found %q of %d bytes, expected %d", numeric, len(numeric), len(where))
		}
		if p, err := parseFilter(where, columns); err == nil {
			p.bind(func(name string) int { return column.Index(columns)[name] })
			p.passes(column.NewBatch(columns, nil, 1), 0)
		}
	})
}
