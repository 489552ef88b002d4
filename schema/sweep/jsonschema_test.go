package sweep_test

import (
	"bytes"
	"encoding/json"
	"path/filepath"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"
	"go.yaml.in/yaml/v3"

	"betaloom/schema/sweep"
)

// validator is another's reader of our JSON Schema.
func validator(t *testing.T) *jsonschema.Schema {
	t.Helper()
	b, err := sweep.JSONSchema()
	if err != nil {
		t.Fatal(err)
	}
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(b))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	c.DefaultDraft(jsonschema.Draft7) // so that $schema is what selects 2020-12
	if err := c.AddResource("sweep.json", doc); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("sweep.json")
	if err != nil {
		t.Fatal(err)
	}
	equal(t, s.DraftVersion, 2020)
	return s
}

// asJSON turns YAML into what a JSON Schema validator takes, as an editor does.
func asJSON(t *testing.T, src []byte) any {
	t.Helper()
	var v any
	if err := yaml.Unmarshal(src, &v); err != nil {
		t.Fatal(err)
	}
	b, err := json.Marshal(v)
	if err != nil {
		t.Fatal(err)
	}
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(b))
	if err != nil {
		t.Fatal(err)
	}
	return doc
}

func TestJSONSchemaAcceptsGood(t *testing.T) {
	s := validator(t)
	files, err := filepath.Glob("testdata/good/*.yaml")
	if err != nil || len(files) < 8 {
		t.Fatalf("%d good files, %v", len(files), err)
	}
	for _, file := range files {
		t.Run(filepath.Base(file), func(t *testing.T) {
			if err := s.Validate(asJSON(t, read(t, file))); err != nil {
				t.Error(err)
			}
		})
	}
}

// TestJSONSchemaRejectsBad takes the bad files whose fault lies in one place
// and in the form of what stands there.
func TestJSONSchemaRejectsBad(t *testing.T) {
	s := validator(t)
	for _, name := range []string{
		"unknown-key", "unknown-key-far", "missing-keys", "format", "sweep-name", "modes-fraction", "modes-zero", "modes-truth",
		"equation", "accuracy-negative", "accuracy-key", "nothing-under-key", "material-none", "material-two-kinds", "material-misplaced-keys",
		"material-unit", "material-index-negative", "material-list", "material-name", "material-axes", "material-sellmeier",
		"parameter-count-zero", "parameter-count-huge", "parameter-count-and-step", "parameter-neither", "parameter-two-forms", "parameter-values-empty",
		"parameter-name", "expr-in-number", "section-none", "section-two", "section-walls-misplaced", "layers-ground-word", "layers-key",
		"strips-fields", "strips-without-fill", "fill-without-strips", "circular-orders-kind", "circular-both", "pipe-shape", "pipe-no-shape",
		"pipe-fill", "pipe-fill-list", "pipe-polygon-few", "pipe-polygon-corner", "window-column", "window-any", "window-correlation", "window-names",
	} {
		t.Run(name, func(t *testing.T) {
			if err := s.Validate(asJSON(t, read(t, "testdata/bad/"+name+".yaml"))); err == nil {
				t.Error("found it valid, expected a fault")
			}
		})
	}
}

// TestJSONSchemaDescribes: every key says what it is for.
func TestJSONSchemaDescribes(t *testing.T) {
	b, err := sweep.JSONSchema()
	if err != nil {
		t.Fatal(err)
	}
	var doc map[string]any
	if err := json.Unmarshal(b, &doc); err != nil {
		t.Fatal(err)
	}
	keys := 0
	var walk func(path string, v any)
	walk = func(path string, v any) {
		m, ok := v.(map[string]any)
		if list, isList := v.([]any); isList {
			for _, item := range list {
				walk(path, item)
			}
		}
		if !ok {
			return
		}
		properties, _ := m["properties"].(map[string]any)
		for name, p := range properties {
			keys++
			if text, _ := p.(map[string]any)["description"].(string); text == "" && name != "correlation" {
				t.Errorf("%s.%s: found no description", path, name)
			}
		}
		for name, item := range m {
			walk(path+"."+name, item)
		}
	}
	walk("", doc)
	if keys < 80 {
		t.Errorf("found %d keys, expected at least 80", keys)
	}
}

// TestReferenceExamples: what the page for users shows is a sweep file.
func TestReferenceExamples(t *testing.T) {
	var blocks []string
	for i, part := range strings.Split(string(read(t, "REFERENCE.md")), "```") {
		if yaml, ok := strings.CutPrefix(part, "yaml\n"); ok && i%2 == 1 {
			blocks = append(blocks, yaml)
		}
	}
	if len(blocks) != 2 {
		t.Fatalf("found %d examples, expected 2", len(blocks))
	}
	for name, src := range map[string]string{"whole": blocks[0], "with windows": blocks[0] + blocks[1]} {
		t.Run(name, func(t *testing.T) {
			if _, err := parse(src); err != nil {
				t.Error(err)
			}
			if err := validator(t).Validate(asJSON(t, []byte(src))); err != nil {
				t.Error(err)
			}
		})
	}
}

// TestReference: the page for users has every key of the schema.
func TestReference(t *testing.T) {
	page := string(read(t, "REFERENCE.md"))
	b, err := sweep.JSONSchema()
	if err != nil {
		t.Fatal(err)
	}
	var doc map[string]any
	if err := json.Unmarshal(b, &doc); err != nil {
		t.Fatal(err)
	}
	seen := 0
	var walk func(v any)
	walk = func(v any) {
		switch v := v.(type) {
		case []any:
			for _, item := range v {
				walk(item)
			}
		case map[string]any:
			properties, _ := v["properties"].(map[string]any)
			for name := range properties {
				seen++
				if !strings.Contains(page, "`"+name+"`") {
					t.Errorf("REFERENCE.md has no `%s`", name)
				}
			}
			for _, item := range v {
				walk(item)
			}
		}
	}
	walk(doc)
	if seen == 0 {
		t.Error("found no key")
	}
}
