package expr

import (
	"strings"
	"testing"
)

func TestOrder(t *testing.T) {
	for _, c := range []struct{ name, list, sorted, circle string }{
		{"in order already", "a=x b=a c=b", "a b c", ""},
		{"backwards", "c=b b=a a=x", "a b c", ""},
		{"no need keeps its place", "b=x a=x", "b a", ""},
		{"itself", "a=x b=b", "a", "b"},
		{"through others, and one that needs them", "a=b b=a c=a d=x", "d", "a b c"},
		{"none", "", "", ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			var list []Definition
			for _, one := range strings.Fields(c.list) {
				name, source, _ := strings.Cut(one, "=")
				e, err := Parse(source)
				if err != nil {
					t.Fatal(err)
				}
				list = append(list, Definition{Name: name, Expr: e})
			}
			sorted, circle := Order(list)
			if names(sorted) != c.sorted || names(circle) != c.circle {
				t.Errorf("found %q and the circle %q, expected %q and %q", names(sorted), names(circle), c.sorted, c.circle)
			}
		})
	}
}

func names(list []Definition) string {
	var all []string
	for _, d := range list {
		all = append(all, d.Name)
	}
	return strings.Join(all, " ")
}
