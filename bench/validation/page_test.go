package main

import (
	"bytes"
	"errors"
	"io"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"ionfall/internal/validation"
)

const root = "../.."

// Goal: the committed page is that of the committed rows. Method: rendered again.
func TestPageIsThatOfTheRows(t *testing.T) {
	var want bytes.Buffer
	if err := run(nil, root, &want, io.Discard); err != nil {
		t.Fatal(err)
	}
	got, err := os.ReadFile(filepath.Join(root, page))
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got, want.Bytes()) {
		t.Errorf("%s is not what the rows give: run go run ./bench/validation -write", page)
	}
}

// Goal: the page's commands run tests. Method: in the named package is a test whose name the
// pattern matches.
func TestCommandsNameTests(t *testing.T) {
	function := regexp.MustCompile(`(?m)^func (Test\w+)\(`)
	for _, p := range parts() {
		if p.command != "" {
			continue
		}
		names, err := filepath.Glob(filepath.Join(root, p.pkg, "*_test.go"))
		if err != nil || len(names) == 0 {
			t.Fatalf("%s: no tests (%v)", p.pkg, err)
		}
		found := 0
		for _, name := range names {
			text, err := os.ReadFile(name)
			if err != nil {
				t.Fatal(err)
			}
			for _, m := range function.FindAllSubmatch(text, -1) {
				if regexp.MustCompile(p.pattern).Match(m[1]) {
					found++
				}
			}
		}
		if found == 0 {
			t.Errorf("%s: no test in %s matches %q", p.file, p.pkg, p.pattern)
		}
	}
}

// module makes a folder with rows under the names.
func module(t *testing.T, names ...string) string {
	t.Helper()
	dir := t.TempDir()
	if err := os.MkdirAll(filepath.Join(dir, "bench"), 0o755); err != nil {
		t.Fatal(err)
	}
	for _, name := range names {
		good := validation.Row{
			Section: "a gas", Quantity: "drift velocity", Unit: "m/s", Reference: 100, Ours: 101,
			Source: "A. Author, J. Example 1, 2 (1903)", Status: "computed", Limit: 0.02,
			LimitKind: validation.Relative,
		}
		bad, other := good, good
		bad.Quantity, bad.Ours = "mean energy", 110
		other.Quantity, other.Source = "diffusion", "B. Author, J. Example 1, 9 (1903)"
		err := validation.Merge(filepath.Join(dir, rowsFolder, name), good.Judged(), bad.Judged(),
			other.Judged())
		if err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// Goal: counts, the failing row, the command and the sections of each part are on the page.
// Method: two parts of three rows from the same two sources, one row of each failing; -write keeps
// what would be printed.
func TestRun(t *testing.T) {
	dir := module(t, "swarm.json", "plasma.json")
	var out bytes.Buffer
	if err := run(nil, dir, &out, io.Discard); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		"\n6 rows from 2 sources, 2 failing.\n",
		"](#collisions-swarms-in-a-uniform-field) | 3 | 2 | 1 | minutes |\n",
		"\n## Collisions: swarms in a uniform field\n",
		"\n    go test ./mcc -run Validation -count 1 -timeout 1h -validate -update\n",
		"\nRows: 3, sources: 2, failing: 1. To repeat (minutes):\n",
		"\nFailing:\n\n* a gas, mean energy\n",
		"\n### a gas\n", "\n| mean energy | m/s | 100 |",
	} {
		if !strings.Contains(out.String(), want) {
			t.Errorf("no %q in\n%s", want, out.String())
		}
	}
	if err := run([]string{"-write"}, dir, io.Discard, io.Discard); err != nil {
		t.Fatal(err)
	}
	written, err := os.ReadFile(filepath.Join(dir, page))
	if err != nil || !bytes.Equal(written, out.Bytes()) {
		t.Errorf("%v; written:\n%s", err, written)
	}
}

// Goal: rows that nobody can repeat, no rows, and a wrong command line are errors that say so.
func TestErrors(t *testing.T) {
	for want, args := range map[string]struct {
		dir   string
		args  []string
		usage bool
	}{
		"no part of the page says how": {dir: module(t, "swarm.json", "other.json")},
		"want to be in the folder":     {dir: t.TempDir()},
		"-wrong":                       {root, []string{"-wrong"}, true},
		`got the argument "page"`:      {root, []string{"page"}, true},
	} {
		err := run(args.args, args.dir, io.Discard, io.Discard)
		if err == nil || !strings.Contains(err.Error(), want) ||
			errors.Is(err, errUsage) != args.usage {
			t.Errorf("got %v, want %q", err, want)
		}
	}
}
