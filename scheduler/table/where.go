package table

import (
	"fmt"
	"math"
	"strings"

	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/expr"
)

// maxComparisons bounds the comparisons with a text in a condition: their
// stand-ins must not be longer than they are.
const maxComparisons = 100

// filter is a condition on the columns of a table.
type filter struct {
	condition *expr.Expr
	numbers   map[string]int // place in the batch of the number columns it names
	types     map[string]column.Type
	texts     []comparison
	stands    map[string]int // the comparison that a stand-in is for
	batch     *column.Batch  // where the row stands that is being tested
	row       int
}

// comparison is column == text or column != text.
type comparison struct {
	column string
	place  int
	text   string
	equal  bool
}

// parseFilter reads a condition. A comparison with a text becomes one of a
// stand-in with 0, of the same length, so that positions in errors stay true.
func parseFilter(where string, columns []column.Column) (*filter, error) {
	f := &filter{numbers: map[string]int{}, types: map[string]column.Type{}, stands: map[string]int{}}
	for _, c := range columns {
		f.types[c.Name] = c.Type
	}
	numeric, err := f.takeTexts(where)
	if err != nil {
		return nil, err
	}
	if f.condition, err = expr.Parse(numeric); err != nil {
		return nil, err
	}
	for _, name := range f.condition.Names() {
		if err := f.name(name, where, columns); err != nil {
			return nil, err
		}
	}
	pure := func(string) (schema.Dimension, bool) { return schema.Dimension{}, true }
	return f, f.condition.Condition(pure)
}

// name notes a name of the condition.
func (f *filter) name(name, where string, columns []column.Column) error {
	if _, ok := f.stands[name]; ok {
		return nil
	}
	t, ok := f.types[name]
	at := max(0, strings.Index(where, name))
	switch {
	case !ok:
		return &expr.Error{Offset: at, Found: "the name " + name, Expected: "a column: " + list(columns), Name: name}
	case t == column.String || t == column.Bytes:
		return &expr.Error{Offset: at, Found: "the text column " + name, Expected: `a comparison such as ` + name + ` == "text"`}
	}
	f.numbers[name] = 0
	return nil
}

// takeTexts replaces the comparisons with texts by stand-ins.
func (f *filter) takeTexts(where string) (string, error) {
	free := f.freeStart()
	var out strings.Builder
	for at := 0; ; {
		quote := strings.IndexAny(where[at:], `"'`)
		if quote < 0 {
			out.WriteString(where[at:])
			return out.String(), nil
		}
		quote += at
		end := strings.IndexByte(where[quote+1:], where[quote])
		if end < 0 {
			return "", &expr.Error{Offset: quote, Found: "a text without an end", Expected: "a closing quote"}
		}
		end += quote + 1
		c, start, err := f.comparison(where, at, quote)
		if err != nil {
			return "", err
		}
		if len(f.texts) == maxComparisons {
			return "", &expr.Error{Offset: quote, Found: "one text more", Expected: fmt.Sprintf("at most %d", maxComparisons)}
		}
		c.text = where[quote+1 : end]
		stand := fmt.Sprintf("%s%d", free, len(f.texts))
		f.stands[stand] = len(f.texts)
		f.texts = append(f.texts, c)
		out.WriteString(where[at:start])
		fmt.Fprintf(&out, "%-*s", end+1-start, stand+">0")
		at = end + 1
	}
}

// comparison reads the column and the operator before a text at quote; they
// begin at start, not before from.
func (f *filter) comparison(where string, from, quote int) (c comparison, start int, err error) {
	before := strings.TrimRight(where[from:quote], " \t\r\n")
	name, equal := strings.CutSuffix(before, "==")
	if !equal {
		var differ bool
		if name, differ = strings.CutSuffix(before, "!="); !differ {
			return c, 0, &expr.Error{Offset: quote, Found: "a text", Expected: `it after a column and == or !=, as in family == "TE0"`}
		}
	}
	name = strings.TrimRight(name, " \t\r\n")
	word := strings.TrimRightFunc(name, inWord)
	c = comparison{column: name[len(word):], equal: equal}
	start = from + len(word)
	if t, ok := f.types[c.column]; !ok || t != column.String {
		return c, 0, &expr.Error{Offset: start, Found: fmt.Sprintf("%q before == or !=", c.column), Expected: "a text column: " + f.textColumns(), Name: c.column}
	}
	return c, start, nil
}

func inWord(r rune) bool {
	return r == '_' || r >= '0' && r <= '9' || r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z'
}

func (f *filter) textColumns() string {
	var names []string
	for _, n := range []string{"family", "mode_type", "symmetry", "z_definition", "origin", "flag", "state", "reason"} {
		if f.types[n] == column.String {
			names = append(names, n)
		}
	}
	return strings.Join(names, ", ")
}

// freeStart gives a start of names that, with digits after it, no column has.
func (f *filter) freeStart() string {
	start := "z"
	for f.taken(start) {
		start += "z"
	}
	return start
}

func (f *filter) taken(start string) bool {
	for name := range f.types {
		if rest, ok := strings.CutPrefix(name, start); ok && strings.Trim(rest, "0123456789") == "" {
			return true
		}
	}
	return false
}

// bind asks where the columns that the condition names stand in a batch.
func (f *filter) bind(place func(name string) int) {
	for name := range f.numbers {
		f.numbers[name] = place(name)
	}
	for i := range f.texts {
		f.texts[i].place = place(f.texts[i].column)
	}
}

// passes reports whether a row is to be written. One for which the condition
// cannot be evaluated, as log(0), does not meet it.
func (f *filter) passes(b *column.Batch, row int) bool {
	f.batch, f.row = b, row
	for _, place := range f.numbers {
		if math.IsNaN(f.number(place)) {
			return false
		}
	}
	met, err := f.condition.True(f.value)
	return err == nil && met
}

// value gives what a name of the condition stands for.
func (f *filter) value(name string) float64 {
	if place, ok := f.numbers[name]; ok {
		return f.number(place)
	}
	c := f.texts[f.stands[name]]
	if (f.batch.Text(c.place, f.row) == c.text) == c.equal {
		return 1
	}
	return 0
}

// number gives a number of the row, NaN where it is missing.
func (f *filter) number(place int) float64 {
	v := &f.batch.Vectors[place]
	if f.batch.Columns[place].Type == column.Float64 {
		return v.Floats[f.row]
	}
	if n := v.Ints[f.row]; n != column.MissingInt {
		return float64(n)
	}
	return math.NaN()
}
