package archtest

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// module makes a module of the given files and loads it.
func module(t *testing.T, files map[string]string) *Module {
	t.Helper()
	dir := t.TempDir()
	files["go.mod"] = "module ionfall\n"
	for name, text := range files {
		path := filepath.Join(dir, filepath.FromSlash(name))
		if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	return load(t, dir)
}

func compare(t *testing.T, got []Violation, want []string) {
	t.Helper()
	var lines []string
	for _, v := range got {
		lines = append(lines, v.String())
	}
	if !slices.Equal(lines, want) {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(lines, "\n"), strings.Join(want, "\n"))
	}
}

// Goal: every import rule is enforced, and what is allowed passes. Method: a module with one of
// each.
func TestImportRules(t *testing.T) {
	m := module(t, map[string]string{
		"mcc/a.go": "package mcc\n\nimport (\n\t\"ionfall/pic\"\n\t\"ionfall/crosssections\"\n" +
			"\t\"math\"\n\t\"log/slog\"\n\t\"ionfall/internal/rng\"\n)\n",
		"mcc/a_test.go":                        "package mcc\n\nimport \"ionfall/pic\"\n",
		"mcc/other_linux.go":                   "package mcc\n\nimport \"time\"\n",
		"mcc/tagged.go":                        "//go:build never\n\npackage mcc\n\nimport \"os\"\n",
		"crosssections/a.go":                   "package crosssections\n\nimport _ \"ionfall/crosssections/internal/fits\"\n",
		"crosssections/internal/fits/a.go":     "package fits\n\nimport \"flag\"\n",
		"crosssections/internal/gen/main.go":   "package main\n\nimport \"os\"\n",
		"internal/store/a.go":                  "package store\n\nimport _ \"github.com/parquet-go/parquet-go\"\n",
		"internal/config/a.go":                 "package config\n\nimport _ \"github.com/parquet-go/parquet-go/compress/zstd\"\n",
		"internal/table/a.go":                  "package table\n\nimport _ \"ionfall/internal/config\"\n",
		"internal/run/a.go":                    "package run\n\nimport _ \"net/http/httptest\"\n",
		"internal/new/a.go":                    "package new\n",
		"internal/new/b.go":                    "package new\n",
		"internal/scan/a.go":                   "package scan\n\nimport _ \"ionfall/internal/new\"\n",
		"internal/rng/testdata/src/ignored.go": "package ignored\n\nimport \"ionfall/pic\"\n",
		"tool/go.mod":                          "module other\n",
		"tool/main.go":                         "package main\n\nimport \"net/http\"\n",
	})
	compare(t, m.Imports(Levels()), []string{
		"crosssections/internal/fits/a.go:3: imports flag: pic, mcc, crosssections, diagnostics " +
			"know nothing of files, clocks, logs and command lines",
		"internal/config/a.go:3: imports github.com/parquet-go/parquet-go/compress/zstd: " +
			"only internal/store may",
		"internal/new/a.go:1: package internal/new has no level: give it one in the table",
		"internal/run/a.go:3: imports net/http/httptest: only internal/web may",
		"internal/scan/a.go:3: imports ionfall/internal/new, which has no level: " +
			"give it one in the table",
		"internal/table/a.go:3: imports ionfall/internal/config of level 1 into internal/table " +
			"of level 1, want a lower level",
		"mcc/a.go:4: imports ionfall/pic of level 3 into mcc of level 2, want a lower level",
		"mcc/a.go:7: imports log/slog: pic, mcc, crosssections, diagnostics " +
			"know nothing of files, clocks, logs and command lines",
		"mcc/other_linux.go:3: imports time: pic, mcc, crosssections, diagnostics " +
			"know nothing of files, clocks, logs and command lines",
		"mcc/tagged.go:5: imports os: pic, mcc, crosssections, diagnostics " +
			"know nothing of files, clocks, logs and command lines",
	})
}

// Goal: every way of changing a package variable is seen, and reading and local names are not
// taken for it. Method: a function with one of each; lines marked "want" must be reported.
func TestStateRules(t *testing.T) {
	source := `package a

import (
	"strings"
	"sync"
	"sync/atomic"
	"example.invalid/other"
)

type box struct{ n int }

func (b *box) set(n int) { b.n = n }
func (b box) get() int   { return b.n }

var (
	table  = []int{1, 2}
	names  = map[string]int{"a": 1}
	whole  = box{1}
	number int
	field  struct{ inner box }
	once   sync.Once               // want
	count  = atomic.Int64{}        // want
	slot   atomic.Pointer[box]     // want
	loaded = sync.OnceValue(func() int { return number })
	hidden = func() int {
		number = 3 // want
		return 0
	}
	plain = strings.NewReplacer("a", "b")
)

func init() {} // want

func writes(p *box) {
	number = 1             // want
	number++               // want
	number += 2            // want
	table[0] = 1           // want
	names["b"] = 2         // want
	delete(names, "a")     // want
	clear(names)           // want
	copy(table[1:], table) // want
	field.inner.n = 3      // want
	(whole).n = 4          // want
	whole.set(3)           // want
	q := &whole            // want
	for number = range 3 { // want
	}
	for _, number = range table { // want
	}
	_, table[1] = 1, 2 // want
	other.Default = q  // want
	inFile = 3         // want
	go func() {
		number = 5 // want
	}()
}

func (b *box) init() {}

func reads(p *box) (table []int) {
	number := 3
	number = 4
	table = nil
	names := map[string]int{}
	names["x"] = whole.get() + inFile
	p.n, p = 3, &box{}
	delete(names, "x")
	p.set(number)
	var other box
	other.n = len(plain.Replace("")) + hidden() + loaded()
	copy := func(x []int) {}
	copy(table)
	for i, whole := range table {
		whole = i
	}
	{
		field := box{}
		field.n = 3
	}
	return table
}
`
	m := module(t, map[string]string{
		"a/a.go": source, "a/b_linux.go": "package a\n\nvar inFile int\n",
		"a/b_windows.go": "package a\n\nvar inFile int\n\nfunc only() { number = 2 }\n",
		"a/a_test.go":    "package a\n\nfunc change() { number = 7 }\n",
	})
	var got, want []string
	for _, v := range m.State() {
		got = append(got, fmt.Sprintf("%s:%d", v.File, v.Line))
	}
	for i, line := range strings.Split(source, "\n") {
		if strings.Contains(line, "// want") {
			want = append(want, fmt.Sprintf("a/a.go:%d", i+1))
		}
	}
	want = append(want, "a/b_windows.go:5")
	if !slices.Equal(got, want) {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
}

// Goal: lines and functions at the limit pass, longer ones do not. Method: both lengths.
func TestFormRules(t *testing.T) {
	line := func(n int) string { return "// " + strings.Repeat("é", n-3) + "\n" }
	body := func(n int) string { return "{\n" + strings.Repeat("\n", n-2) + "}\n" }
	text := "package a\n" + line(100) + line(101) + "\nfunc short() " + body(70) + "\nfunc long() " +
		body(71)
	m := module(t, map[string]string{
		"a/a.go": text, "a/a_test.go": text,
		"a/g.go": "// Code generated by a test. DO NOT EDIT.\n\n" + text,
	})
	compare(t, m.Form(), []string{
		"a/a.go:3: line of 101 columns, want at most 100",
		"a/a.go:76: function long of 71 lines, want at most 70",
	})
}

// Goal: traces are found in any text file, whatever their case. Method: one in each kind of file.
func TestTracesRules(t *testing.T) {
	word := traces()[0]
	m := module(t, map[string]string{
		"README.md": "clean\nsee " + word + "x\n", "a/a_test.go": "package a // " + word + "\n",
		"data.bin": "\x00" + word, "testdata/x.txt": strings.ToUpper(word),
		".git/config": word, "results/run/log": word, "web/node_modules/x.js": word,
		"clean.txt": "workshop",
	})
	list, err := m.Traces([]string{word})
	if err != nil {
		t.Fatal(err)
	}
	compare(t, list, []string{
		"README.md:2: holds " + word, "a/a_test.go:1: holds " + word,
		"testdata/x.txt:1: holds " + word,
	})
}
