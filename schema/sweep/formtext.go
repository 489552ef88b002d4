package sweep

import (
	"regexp"
	"slices"

	"go.yaml.in/yaml/v3"
)

// text is a text and where it stands.
type text struct {
	s    string
	path string
	node *yaml.Node
}

// plainText is a form for a text. pattern, where not nil, is what it must
// match and rule says it in words.
type plainText struct {
	what    string
	pattern *regexp.Regexp
	rule    string
	most    int // bytes
}

func (f plainText) read(r *reader, at place) (text, bool) {
	s, ok := r.scalar(at, f.expects())
	if !ok {
		return text{}, false
	}
	if f.pattern != nil && !f.pattern.MatchString(s) || len(s) > f.most {
		r.fault(at.path, quote(s), f.expects())
		return text{}, false
	}
	return text{s, at.path, at.node}, true
}

func (f plainText) expects() string {
	if f.rule == "" {
		return f.what
	}
	return f.what + ": " + f.rule
}

func (f plainText) describe() fragment {
	d := fragment{"type": "string", "minLength": 1, "maxLength": f.most}
	if f.pattern != nil {
		d["pattern"] = f.pattern.String()
	}
	return d
}

// bare gives the text of a form alone.
func bare(f form[text]) form[string] {
	return mapped[text, string]{f, func(t text) string { return t.s }}
}

// choice is a form for one of a few words.
type choice struct {
	what  string
	words []string
}

func (f choice) read(r *reader, at place) (string, bool) {
	s, ok := r.scalar(at, f.expects())
	if !ok {
		return "", false
	}
	if !slices.Contains(f.words, s) {
		r.fault(at.path, quote(s), f.expects()+r.hint(s, f.words))
		return "", false
	}
	return s, true
}

func (f choice) expects() string    { return f.what + ": " + orList(f.words) }
func (f choice) describe() fragment { return fragment{"enum": f.words} }

// role is what a material is used for.
type role string

const (
	dielectric  role = "a dielectric"
	metal       role = "a metal"
	anyMaterial role = "a material" // of a strip, or of a layer with strips
)

// materialUse is a place where a material is named.
type materialUse struct {
	path, name string
	role       role
}

// materialName is a form for the name of a material.
type materialName struct{ role role }

func (f materialName) read(r *reader, at place) (string, bool) {
	s, ok := r.scalar(at, f.expects())
	if ok {
		r.materials = append(r.materials, materialUse{at.path, s, f.role})
	}
	return s, ok
}

func (f materialName) expects() string { return "the name of " + string(f.role) + " under materials" }
func (f materialName) describe() fragment {
	return fragment{"type": "string", "pattern": materialPattern.String()}
}

// The rules of names. A parameter and a layer give their names to columns.
var (
	sweepPattern     = regexp.MustCompile(`^[a-z0-9]([a-z0-9-]{0,62}[a-z0-9])?$`)
	materialPattern  = regexp.MustCompile(`^[A-Za-z][A-Za-z0-9_-]{0,63}$`)
	parameterPattern = regexp.MustCompile(`^[a-z][a-z0-9_]{0,63}$`)
	builtinPattern   = regexp.MustCompile(`^[a-z0-9][a-z0-9-]{0,63}$`)
)

const (
	materialRule  = "a name of letters, digits, _ and -, that starts with a letter (at most 64)"
	parameterRule = "a name of small letters, digits and _, that starts with a letter (at most 64)"
)

// columnName is a form for a name that a column carries.
func columnName(what string) form[string] {
	return bare(plainText{"the name of " + what, parameterPattern, parameterRule, maxName})
}
