package config

import (
	"flag"
	"os"
	"path/filepath"
	"testing"
)

var update = flag.Bool("update", false, "write the golden files anew")

// minimal is the shortest input.
const minimal = `gap: 40 mm
gas:
  pressure: 5 Pa
  mixture: {Ar: 1}
drive:
  tones: [{frequency: 13.56 MHz, amplitude: 250 V}]
`

// mustParse reads an input that has to be valid.
func mustParse(t *testing.T, src string) *Case {
	t.Helper()
	c, err := Parse("test.yaml", []byte(src))
	if err != nil {
		t.Fatalf("%v\nin\n%s", err, src)
	}
	return c
}

// golden compares a text with a file, or writes it under -update.
func golden(t *testing.T, path, got string) {
	t.Helper()
	if *update {
		if err := os.WriteFile(path, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("%s: got\n%s\nwant\n%s", filepath.Base(path), got, want)
	}
}

// validFiles are the samples of whole inputs.
func validFiles(t testing.TB) map[string][]byte {
	t.Helper()
	paths, err := filepath.Glob("testdata/*.yaml")
	if err != nil || len(paths) < 3 {
		t.Fatalf("%d samples, %v", len(paths), err)
	}
	files := map[string][]byte{}
	for _, p := range paths {
		src, err := os.ReadFile(p)
		if err != nil {
			t.Fatal(err)
		}
		files[p] = src
	}
	return files
}
