package scan

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/store"
	"ionfall/internal/table"
)

// plane is an invented map of 5 x 4 points with values x + 10 y, one of them failed and one not to be
// trusted.
func plane() *Map {
	m := &Map{
		Short: []string{"pressure", "amplitude"},
		Of:    "ion_mean_energy_eV.grounded.all", Unit: "eV",
		Axes: []Axis{{Path: "gas.pressure", Unit: "Pa"}, {Path: "drive.tones.0.amplitude", Unit: "V"}},
	}
	for i := range 5 {
		for j := range 4 {
			p := MapPoint{
				X: 5 * float64(i), Y: 100 * float64(j), Value: 5*float64(i) + 10*float64(j),
				StdErr: 0.3, Status: Done, Verdict: store.OK,
			}
			switch {
			case i == 0 && j == 0:
				p.Status, p.Verdict, p.Value = Failed, "", math.NaN()
			case i == 4 && j == 3:
				p.Verdict = store.Fail
			case i == 2:
				p.Verdict = store.Warn
			}
			m.Points = append(m.Points, p)
		}
	}
	return m
}

// Goal: contours are where the value crosses the level, and nowhere near a point that is not sound.
// Method: a plane, whose contours are known exactly.
func TestContours(t *testing.T) {
	r := plane().raster()
	if r == nil {
		t.Fatal("the points are no grid")
	}
	for _, level := range []float64{3, 12, 27, 46} {
		list := r.contour(level)
		for _, s := range list {
			for _, end := range [][2]float64{{s.X0, s.Y0}, {s.X1, s.Y1}} {
				if v := end[0] + end[1]/10; math.Abs(v-level) > 1e-9 {
					t.Errorf("level %g passes through %v, where the value is %g", level, end, v)
				}
				if end[0] < 5 && end[1] < 100 || end[0] > 15 && end[1] > 200 {
					t.Errorf("level %g has a contour beside a point that is not sound: %v", level, end)
				}
			}
		}
		if inside := level == 12 || level == 27; inside != (len(list) > 0) {
			t.Errorf("level %g: %d pieces", level, len(list))
		}
	}
	m := plane()
	m.Points = m.Points[:17]
	if m.raster() != nil {
		t.Error("points that fill no grid are taken for one")
	}
}

// Goal: the picture tells every kind of point. Method: read it.
func TestPicture(t *testing.T) {
	m := plane()
	for _, against := range []int{2, 1} {
		m.Axes = m.Axes[:against]
		picture, err := m.SVG()
		if err != nil {
			t.Fatal(err)
		}
		for _, want := range []string{
			"<svg", ">ok<", ">warn<", ">not trusted<", ">not computed<", ">pressure [Pa]<",
			"ion mean energy, grounded [eV]",
		} {
			if !strings.Contains(string(picture), want) {
				t.Errorf("%d axes: %q is missing from the picture", against, want)
			}
		}
		if dir := os.Getenv("IONFALL_TEST_PICTURES"); dir != "" {
			put(t, dir, m.Axes[against-1].Path+".svg", string(picture))
		}
	}
	none := plane()
	for i := range none.Points {
		none.Points[i].Status, none.Points[i].Value = Waiting, math.NaN()
	}
	if _, err := none.SVG(); err != nil {
		t.Errorf("nothing computed yet: %v", err)
	}
}

// Goal: a map takes the points of one value of the other inputs. Method: a table made by hand.
func TestMapOfScan(t *testing.T) {
	p := goodPlan(t, `vary:
  gas.pressure: [50 Pa, 60 Pa]
  gap: [1 cm, 2 cm]
  drive.tones.0.amplitude: [100 V, 200 V, 300 V]
`)
	f := Unopened(p, filepath.Join(p.folder, "scan"))
	n := len(p.Points)
	points := table.New("points", "")
	status, verdict, value, se := make([]string, n), make([]string, n), missing(n), missing(n)
	for i := range n {
		status[i], verdict[i], value[i], se[i] = Done, store.OK, float64(i), 0.1
	}
	points.AddText("status", "", status)
	points.AddText("verdict", "", verdict)
	points.AddEstimate("self_bias_V", "V", "", value, se)
	m, err := f.Map(points, "self_bias_V", []string{"gas.pressure", "drive.tones.0.amplitude"},
		map[string]string{"gap": "0.02 m"})
	if err != nil {
		t.Fatal(err)
	}
	if len(m.Points) != 6 || m.Points[0].Value != 3 || m.Points[5].Y != 300 || m.raster() == nil {
		t.Errorf("got %+v", m)
	}
	for want, ask := range map[string]struct {
		against []string
		at      string
	}{
		"want one or two of the inputs": {[]string{"gas.presure"}, "0.02 m"},
		"want one of 0.01 m, 0.02 m":    {[]string{"gas.pressure"}, "3 cm"},
		"is not drawn against":          {[]string{"gap"}, "0.02 m"},
	} {
		_, err := f.Map(points, "self_bias_V", ask.against, map[string]string{"gap": ask.at})
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want %s", err, want)
		}
	}
}

// Goal: the search adds points on the disk, and the recommended settings are confirmed by a fresh run
// within what was predicted. Method: the smallest discharge; a folder opened anew has the same points.
func TestWindowOfRuns(t *testing.T) {
	p := goodPlan(t, `vary:
  drive.tones.0.amplitude: {from: 120 V, to: 300 V}
sampling: {method: halton, points: 4}
`)
	f := open(t, p, "scan")
	w, err := f.FindWindow(t.Context(), WindowOptions{
		Options: Options{Cores: 2}, Best: "ion_flux_m2ps.grounded.all", Probability: 0.9, Doubt: 0.001,
		MostPoints: 6, Untrusted: true,
		Wants: []Want{{Path: "ion_mean_energy_eV.grounded.all", Bound: 11}},
	})
	if err != nil {
		t.Fatal(err)
	}
	if w.Points != 6 || len(p.Points) != 7 || !w.Inside || w.Settings.Number != 7 {
		t.Errorf("got %+v with %d points", w, len(p.Points))
	}
	for _, r := range w.Results {
		t.Logf("%s: predicted %+v, got %+v", r.Path, r.Predicted, r.Got)
		if math.Abs(r.Got.Value-r.Predicted.Mean) > 4*math.Hypot(r.Got.SE, r.Predicted.StdErr) {
			t.Errorf("%s: the fresh run is not what was predicted", r.Path)
		}
	}
	again, err := Load(f.Dir)
	if err != nil {
		t.Fatal(err)
	}
	found, err := Find(again, f.Dir)
	if err != nil || len(found.Plan.Points) != 7 ||
		string(found.Plan.Points[6].Input) != string(w.Settings.Input) {
		t.Errorf("the folder has %d points, %v", len(again.Points), err)
	}
	probability, err := store.ReadTable(filepath.Join(f.Dir, "window.parquet"))
	if err != nil || probability.Rows() != 201 {
		t.Errorf("window.parquet: %v", err)
	}
	_, err = f.FindWindow(t.Context(), WindowOptions{
		Options: Options{Cores: 2}, Wants: []Want{{Path: "ion_flux", Bound: 1}}, Untrusted: true,
	})
	if err == nil || !strings.Contains(err.Error(), "has no result ion_flux; it has ") {
		t.Errorf("unknown result: %v", err)
	}
}
