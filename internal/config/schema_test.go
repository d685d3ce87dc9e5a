package config

import (
	"bytes"
	"encoding/json"
	"fmt"
	"os"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"
	"go.yaml.in/yaml/v4"
)

// compiled is the schema, ready to check.
func compiled(t testing.TB) *jsonschema.Schema {
	t.Helper()
	src, err := Schema()
	if err != nil {
		t.Fatal(err)
	}
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(src))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("input.json", doc); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("input.json")
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// validate reads YAML the way an editor does, through JSON, and applies the schema.
func validate(s *jsonschema.Schema, src []byte) error {
	var data any
	if err := yaml.Load(src, &data); err != nil {
		return fmt.Errorf("yaml: %w", err)
	}
	text, err := json.Marshal(data)
	if err != nil {
		return fmt.Errorf("json: %w", err)
	}
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(text))
	if err != nil {
		return fmt.Errorf("json: %w", err)
	}
	return s.Validate(doc)
}

// Goal: what the loader accepts, the schema accepts. Method: the samples and their resolved form.
func TestSchemaAcceptsSamples(t *testing.T) {
	s := compiled(t)
	for name, src := range validFiles(t) {
		resolved, err := mustParse(t, string(src)).Resolved()
		if err != nil {
			t.Fatal(err)
		}
		for _, text := range [][]byte{src, resolved} {
			if err := validate(s, text); err != nil {
				t.Errorf("%s: %v\n%s", name, err, text)
			}
		}
	}
}

// Goal: the schema sees the mistakes it can see, and which they are is known. Method: the files
// of the bad inputs.
func TestSchemaSeesMistakes(t *testing.T) {
	s := compiled(t)
	for _, b := range badInputs() {
		src, err := os.ReadFile(badDir + "/" + b.name + ".yaml")
		if err != nil {
			t.Fatal(err)
		}
		if err := validate(s, src); (err != nil) != b.schema {
			t.Errorf("%s: got %v, want an error: %v", b.name, err, b.schema)
		}
	}
}

// Goal: every key has a description, and every spelling of a unit is in its pattern. Method: walk
// the schema; put each spelling into the file.
func TestSchemaIsComplete(t *testing.T) {
	src, err := Schema()
	if err != nil {
		t.Fatal(err)
	}
	var root map[string]any
	if err := json.Unmarshal(src, &root); err != nil {
		t.Fatal(err)
	}
	keys := 0
	var walk func(path string, v any)
	walk = func(path string, v any) {
		switch v := v.(type) {
		case []any:
			for _, e := range v {
				walk(path, e)
			}
		case map[string]any:
			props, _ := v["properties"].(map[string]any)
			for key, p := range props {
				keys++
				if text, _ := p.(map[string]any)["description"].(string); len(text) < 8 {
					t.Errorf("%s.%s has no description", path, key)
				}
			}
			for key, e := range v {
				walk(path+"."+key, e)
			}
		}
	}
	walk("", root)
	if keys != 100 {
		t.Errorf("%d keys, want 100", keys)
	}
	if v, _ := root["$schema"].(string); !strings.Contains(v, "2020-12") {
		t.Errorf("dialect %q, want 2020-12", v)
	}
	s := compiled(t)
	for _, spelling := range pressure().spellings() {
		text := strings.Replace(minimal, "5 Pa", "1e-3 "+spelling, 1)
		if err := validate(s, []byte(text)); err != nil {
			t.Errorf("%s: %v", spelling, err)
		}
	}
}
