package run

import (
	"context"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"ionfall/internal/store"
	"ionfall/internal/validation"

	"golang.org/x/sync/errgroup"
)

var (
	update   = flag.Bool("update", false, "keep the comparisons that were run as rows")
	keptRuns = flag.String("runs", "", "folder in which the runs of long checks are kept, found "+
		"again when finished and continued when not; for the same program only")
)

// rowsFolder holds the rows of comparisons, one file a test.
const rowsFolder = "../../testdata/validation"

// record judges the rows and keeps them in the file if asked.
func record(t *testing.T, file string, rows ...validation.Row) {
	t.Helper()
	validation.Record(t, filepath.Join(rowsFolder, file), *update, rows...)
}

// onlyWhenValidating skips a long check.
func onlyWhenValidating(t *testing.T, takes string) {
	t.Helper()
	if !*validate {
		t.Skip(takes + ": give -validate")
	}
}

// runAll carries out the inputs, two at once with one worker each, and returns their summaries.
func runAll(t *testing.T, inputs []string) []*store.Summary {
	t.Helper()
	plans := make([]*Plan, len(inputs))
	for i, text := range inputs {
		plans[i] = plan(t, text)
	}
	folder := *keptRuns
	if folder == "" {
		folder = t.TempDir()
	}
	list := make([]*store.Summary, len(plans))
	group, ctx := errgroup.WithContext(t.Context())
	group.SetLimit(2)
	for i, p := range plans {
		group.Go(func() error {
			var err error
			list[i], err = runOne(ctx, p, filepath.Join(folder, p.InputSHA256()[:16]))
			return err
		})
	}
	if err := group.Wait(); err != nil {
		t.Fatal(err)
	}
	return list
}

// runOne carries out a plan in the folder, or what is left to do of it there.
func runOne(ctx context.Context, p *Plan, out string) (*store.Summary, error) {
	o := Options{Out: out, Cores: 1}
	var s *store.Summary
	_, err := os.Stat(out)
	_, unfinished := os.Stat(out + ".running")
	switch {
	case err == nil:
		s, err = store.ReadSummary(filepath.Join(out, store.SummaryFile))
	case unfinished == nil:
		s, _, err = Resume(ctx, out, o)
	default:
		s, _, err = Run(ctx, p, o)
	}
	if err != nil {
		return nil, fmt.Errorf("%w, of the input:\n%s", err, p.Input)
	}
	return s, nil
}

// runWithHistory carries out an input and returns its periods, too.
func runWithHistory(t *testing.T, input string) (*store.Summary, []Row) {
	t.Helper()
	o := Options{Out: filepath.Join(t.TempDir(), "out"), Cores: 2}
	p := plan(t, input)
	folder, err := createFolder(p, o)
	if err != nil {
		t.Fatal(err)
	}
	m := &machine{plan: p, options: o, folder: folder, started: time.Now(), cpuAtOpen: cpuSeconds()}
	if err := m.open(); err != nil {
		t.Fatal(err)
	}
	s, _, err := m.finish(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	return s, m.history
}

// lookup returns a result that must be there.
func lookup(t *testing.T, s *store.Summary, path string) store.Value {
	t.Helper()
	v, ok := s.Lookup(path)
	if !ok {
		t.Fatalf("no result %s", path)
	}
	return v
}

// doubts names the checks that are not ok, with their verdicts.
func doubts(s *store.Summary) string {
	var list []string
	for _, c := range s.Checks {
		if c.Verdict != store.OK {
			list = append(list, fmt.Sprintf("%s %s %.2g", c.Name, c.Verdict, c.Value))
		}
	}
	return strings.Join(list, ", ")
}

// number reads a number that may come from memory or from a file.
func number(v any) float64 {
	switch v := v.(type) {
	case int:
		return float64(v)
	case int64:
		return float64(v)
	case float64:
		return v
	default:
		return math.NaN()
	}
}

// Goal: with a folder for runs, a finished run is not made again, and gives the same. Method: the
// same short run twice; its folder is looked at for changes.
func TestKeptRunIsFoundAgain(t *testing.T) {
	out := filepath.Join(t.TempDir(), "out")
	first, err := runOne(t.Context(), plan(t, short), out)
	if err != nil {
		t.Fatal(err)
	}
	before, err := os.Stat(filepath.Join(out, store.SummaryFile))
	if err != nil {
		t.Fatal(err)
	}
	again, err := runOne(t.Context(), plan(t, short), out)
	if err != nil {
		t.Fatal(err)
	}
	after, err := os.Stat(filepath.Join(out, store.SummaryFile))
	if err != nil || !after.ModTime().Equal(before.ModTime()) {
		t.Errorf("the run was made again (%v)", err)
	}
	const path = "ion_flux_m2ps.grounded.all"
	if a, b := lookup(t, first, path), lookup(t, again, path); a != b {
		t.Errorf("%s: %v, found again as %v", path, a, b)
	}
	if a, b := chosenBy(t, first), chosenBy(t, again); a != b || a.cells != 32 {
		t.Errorf("numerics %v, found again as %v", a, b)
	}
}
