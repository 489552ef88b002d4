package sweep

import (
	"encoding/json"
	"fmt"
	"math"
	"strings"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

// JSONSchema gives the JSON Schema (draft 2020-12) of the sweep file, for
// editors. It comes from the forms that read the file. It cannot tell what only the whole
// file can: unknown names, dimensions of parameters, the rules of a section.
func JSONSchema() ([]byte, error) {
	f := sweepForm().describe()
	f["$schema"] = "https://json-schema.org/draft/2020-12/schema"
	f["title"] = "betaloom sweep file"
	b, err := json.MarshalIndent(f, "", "  ")
	if err != nil {
		return nil, fmt.Errorf("sweep: JSON Schema: %w", err)
	}
	return append(b, '\n'), nil
}

// decimal matches a decimal number, as quantity.Parse reads it.
const decimal = `[+-]?([0-9]+[.]?[0-9]*|[.][0-9]+)([eE][+-]?[0-9]+)?`

// compound matches a unit of several names or with a power, whose dimension
// a pattern cannot check.
const compound = `(1|[A-Za-z]+)( *[*/] *[A-Za-z]+| *\^ *-?[0-9]+)+`

// unitPattern matches a number with one of the units, with a compound unit,
// or with none where bare is "?".
func unitPattern(bare string, units ...string) string {
	return "^ *" + decimal + " *(" + strings.Join(append(units, compound), "|") + ")" + bare + " *$"
}

// fragment is the JSON Schema of a quantity of this measure; where it is a
// pure number, a number too.
func (m measure) fragment() fragment {
	if m.dim == pure {
		return fragment{"anyOf": []fragment{m.in.limit(fragment{"type": "number"}), {"type": "string", "pattern": "^ *" + decimal + " *$"}}}
	}
	return fragment{"type": "string", "pattern": unitPattern("", unitsOf(m.dim)...)}
}

// limit adds the span to the fragment of a number.
func (s span) limit(f fragment) fragment {
	least, most := "minimum", "maximum"
	if s.open {
		least, most = "exclusiveMinimum", "exclusiveMaximum"
	}
	if !math.IsInf(s.lo, 0) {
		f[least] = s.lo
	}
	if !math.IsInf(s.hi, 0) {
		f[most] = s.hi
	}
	return f
}

// unitsOf lists the unit names of a dimension.
func unitsOf(d schema.Dimension) []string {
	var all []string
	for _, n := range quantity.Names() {
		if u, err := quantity.ParseUnit(n); err == nil && u.Dimension == d {
			all = append(all, n)
		}
	}
	return all
}

// parameterName is the JSON Schema of a parameter's name.
func parameterName() fragment {
	return fragment{"type": "string", "pattern": parameterPattern.String()}
}
