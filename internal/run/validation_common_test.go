package run

import (
	"context"
	"flag"
	"fmt"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"ionfall/internal/store"
	"ionfall/internal/validation"

	"golang.org/x/sync/errgroup"
)

var update = flag.Bool("update", false, "keep the comparisons that were run as rows")

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
	folder := t.TempDir()
	list := make([]*store.Summary, len(plans))
	group, ctx := errgroup.WithContext(t.Context())
	group.SetLimit(2)
	for i, p := range plans {
		group.Go(func() error {
			var err error
			list[i], err = runOne(ctx, p, filepath.Join(folder, fmt.Sprint(i)))
			return err
		})
	}
	if err := group.Wait(); err != nil {
		t.Fatal(err)
	}
	return list
}

func runOne(ctx context.Context, p *Plan, out string) (*store.Summary, error) {
	s, _, err := Run(ctx, p, Options{Out: out, Cores: 1})
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

// provenance returns a number of the provenance.
func provenance(s *store.Summary, key string) float64 {
	switch v := s.Provenance[key].(type) {
	case int:
		return float64(v)
	case int64:
		return float64(v)
	case float64:
		return v
	default:
		return 0
	}
}
