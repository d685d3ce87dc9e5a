// Package examples holds one folder a case; its test checks that each still is what its page says.
package examples

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/run"
)

// Goal: every example is a valid input with a page of its own that names the command to run it and
// what to expect. The gate runs the first one.
func TestExamples(t *testing.T) {
	inputs, err := filepath.Glob("*/input.yaml")
	if err != nil || len(inputs) == 0 {
		t.Fatalf("no examples: %v", err)
	}
	for _, input := range inputs {
		p, err := run.Prepare(input)
		if err != nil {
			t.Errorf("%s: %v", input, err)
			continue
		}
		if _, err := p.Describe(); err != nil {
			t.Errorf("%s: %v", input, err)
		}
		page, err := os.ReadFile(filepath.Join(filepath.Dir(input), "README.md"))
		if err != nil {
			t.Error(err)
			continue
		}
		for _, want := range []string{
			"go run ./cmd/ionfall run examples/" + filepath.ToSlash(input), "expect", "+-", "You will learn",
		} {
			if !strings.Contains(string(page), want) {
				t.Errorf("%s: its page does not say %q", input, want)
			}
		}
	}
}
