package report

import (
	"bytes"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"ionfall/internal/invented"
)

// Goal: the page of a scan tells inputs from results, draws each result over each input that
// varies, and marks every failed point. Method: an invented scan of 40 points, 4 of them failed.
func TestScanPage(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "grid")
	if err := invented.Scan(dir, 40, 0); err != nil {
		t.Fatal(err)
	}
	s, err := OpenScan(dir)
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Inputs) != 2 || len(s.Results) != 1 || len(s.Points) != 40 || s.failed() != 4 {
		t.Fatalf("%d inputs, %d results, %d points, %d failed", len(s.Inputs), len(s.Results),
			len(s.Points), s.failed())
	}
	figures := s.Figures()
	if len(figures) != 2 {
		t.Fatalf("%d figures, want 2", len(figures))
	}
	for _, f := range figures {
		svg, err := f.SVG()
		if err != nil {
			t.Fatal(err)
		}
		// one more of each in the legend
		if n := strings.Count(svg, `class="cross"`); n != 5 {
			t.Errorf("%s: %d crosses, want 5", f.ID, n)
		}
		if n := strings.Count(svg, "<circle"); n != 37 {
			t.Errorf("%s: %d sound points, want 37", f.ID, n)
		}
		data, err := f.CSV()
		if err != nil || bytes.Count(data, []byte(",fail,")) != 4 {
			t.Errorf("%s: %v, failed rows %d", f.ID, err, bytes.Count(data, []byte(",fail,")))
		}
	}
	page, err := ScanPage(s)
	if err != nil {
		t.Fatal(err)
	}
	rows := regexp.MustCompile(`(?s)<tr class="v-fail">.*?</tr>`).FindAll(page, -1)
	if len(rows) != 4 {
		t.Errorf("%d rows of failed points, want 4", len(rows))
	}
	for _, row := range rows {
		if bytes.Count(row, []byte("✗")) != 2 { // the verdict and the result
			t.Errorf("marks missing: %s", row)
		}
	}
	if bytes.Count(page, []byte("<td>✗")) > 0 {
		t.Error("a sound value is marked")
	}
}

// Goal: a folder that is no scan and a damaged table are refused. Method: one of each.
func TestBadScans(t *testing.T) {
	if _, err := OpenScan(t.TempDir()); err == nil {
		t.Error("an empty folder is taken for a scan")
	}
	dir := t.TempDir()
	plan := filepath.Join(dir, "plan.yaml")
	if err := os.WriteFile(plan, []byte("base: x.yaml\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	if IsScan(dir) {
		t.Error("a folder with a plan alone looks like a scan")
	}
}
