package report

import (
	"bytes"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"

	"ionfall/internal/invented"
	"ionfall/internal/store"
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
	if len(figures) != 3 || figures[0].Map == nil {
		t.Fatalf("%d figures, want a map and two of curves", len(figures))
	}
	for _, f := range figures[1:] {
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

// Goal: a map colours sound points only, marks the others by why, draws no contour past them, and has
// short names with units. Method: a plane over 4 x 4 points in each of two gaps, with a failed point
// and one without a result; the contours that are left lie on the plane.
func TestScanMaps(t *testing.T) {
	s := &Scan{Name: "plane", Points: make([]ScanPoint, 32)}
	var p, v, gap, z, se Numbers
	for i := range 32 {
		p, v, gap = append(p, float64(1+i%4)), append(v, float64(100*(1+i/4%4))), append(gap, float64(1+i/16))
		z, se = append(z, p[i]+v[i]/100), append(se, 0.1)
		s.Points[i] = ScanPoint{Number: int64(i + 1), Verdict: store.OK, Status: "done"}
	}
	s.Points[5].Verdict, z[5] = store.Fail, 99
	s.Points[10].Verdict, z[10], se[10] = "", math.NaN(), math.NaN()
	s.Inputs = []ScanColumn{
		{Name: "gas.pressure_Pa", Unit: "Pa", Values: p},
		{Name: "drive.tones.0.amplitude_V", Unit: "V", Values: v},
		{Name: "gap_m", Unit: "m", Values: gap},
	}
	s.Results = []ScanColumn{{Name: "ion_mean_energy_eV.grounded.all", Unit: "eV", Values: z, SE: se}}
	maps := s.Maps()
	if len(maps) != 2 {
		t.Fatalf("%d maps, want one a gap", len(maps))
	}
	m, f := maps[0].Map, &maps[0]
	if !math.IsNaN(m.Z[5]) || !math.IsNaN(m.Z[10]) || m.Z[6] != 5 || len(maps[1].Map.Marks) != 0 ||
		!slices.Equal(m.Marks, []Mark{{2, 200, true}, {3, 300, false}}) {
		t.Errorf("got %+v", m)
	}
	if f.Title != "ion mean energy, grounded over pressure and amplitude; gap 1 m" ||
		f.X.Title() != "pressure [Pa]" {
		t.Errorf("got %q, %q", f.Title, f.X.Title())
	}
	svg, err := f.SVG()
	if err != nil {
		t.Fatal(err)
	}
	if strings.Count(svg, `class="cross"`) != 1 || strings.Count(svg, `class="open"`) != 1 ||
		strings.Count(svg, `class="cell"`) != 14 {
		t.Errorf("marks or values are missing from\n%s", svg)
	}
	grid := make([][]float64, 4)
	for i := range grid {
		for j := range 4 {
			grid[i] = append(grid[i], m.Z[4*j+i])
		}
	}
	for _, c := range Contour(m.MiddleX, m.MiddleY, grid, 4.5) {
		for _, end := range [][2]float64{{c.X0, c.Y0}, {c.X1, c.Y1}} {
			near := math.Abs(end[0]-2) < 1 && math.Abs(end[1]-200) < 100 ||
				math.Abs(end[0]-3) < 1 && math.Abs(end[1]-300) < 100
			if near || math.Abs(end[0]+end[1]/100-4.5) > 1e-9 {
				t.Errorf("the contour passes %v", end)
			}
		}
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
