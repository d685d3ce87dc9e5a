package report

import (
	"path/filepath"
	"testing"

	"ionfall/internal/invented"
)

// opened is an invented run, read.
func opened(t testing.TB, name, verdict string, ions ...string) *Run {
	t.Helper()
	if ions == nil {
		ions = []string{"Ar+"}
	}
	dir := filepath.Join(t.TempDir(), name)
	if err := invented.Run(dir, invented.Options{Verdict: verdict, Ions: ions}); err != nil {
		t.Fatal(err)
	}
	r, err := Open(dir)
	if err != nil {
		t.Fatal(err)
	}
	return r
}
