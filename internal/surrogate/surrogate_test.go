package surrogate

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"
)

// settings returns n points of a box by Halton's sequence (bases 2 and 3).
func settings(n int) [][]float64 {
	radical := func(i, base int) float64 {
		f, r := 1.0, 0.0
		for ; i > 0; i /= base {
			f /= float64(base)
			r += f * float64(i%base)
		}
		return r
	}
	var list [][]float64
	for i := 1; i <= n; i++ {
		list = append(list, []float64{1 + 19*radical(i, 2), 100 + 300*radical(i, 3)})
	}
	return list
}

// response is smooth in both settings, like an ion energy over pressure and voltage.
func response(x []float64) float64 { return 0.4 * x[1] / (1 + 0.25*x[0]) }

func box(x [][]float64, y, se []float64) Data {
	return Data{Low: []float64{1, 100}, High: []float64{20, 400}, X: x, Y: y, SE: se}
}

// Goal: a smooth function is predicted between exact points, through which the process passes.
func TestExactPoints(t *testing.T) {
	x := settings(40)
	var y []float64
	for _, p := range x {
		y = append(y, response(p))
	}
	m, err := Fit(box(x, y, nil))
	if err != nil {
		t.Fatal(err)
	}
	for i, p := range x {
		if got, _ := m.Predict(p); math.Abs(got-y[i]) > 0.5 {
			t.Errorf("at point %d: %.3f, want %.3f", i, got, y[i])
		}
	}
	worst := 0.0
	for _, p := range [][]float64{{3, 150}, {8, 250}, {15, 350}, {2.5, 300}, {12, 130}} {
		got, se := m.Predict(p)
		worst = math.Max(worst, math.Abs(got-response(p)))
		if math.Abs(got-response(p)) > 5*se+0.1 {
			t.Errorf("at %v: %.3f +- %.3f, want %.3f", p, got, se, response(p))
		}
	}
	if worst > 2.5 {
		t.Errorf("the worst prediction is off by %.2f of values up to 128", worst)
	}
	if far, _ := m.Predict([]float64{8, 250}); far == 0 {
		t.Error("no prediction")
	}
}

// Goal: the intervals of predictions are honest. Method: 40 data sets of 30 noisy points, each
// predicted at 5 settings in the box; 95 % intervals hold the truth 88 to 99 times in 100. (The
// binomial scatter of 200 is 1.5 %, but the 5 of a set are correlated: 3 % at most.)
func TestIntervalsCover(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	hits, all := 0, 0
	sum := 0.0
	for range 40 {
		x := settings(30)
		var y, se []float64
		for _, p := range x {
			e := 0.02 * response(p)
			y, se = append(y, response(p)+e*r.NormFloat64()), append(se, e)
		}
		m, err := Fit(box(x, y, se))
		if err != nil {
			t.Fatal(err)
		}
		for _, z := range m.LeaveOneOut() {
			sum += z * z / 30 / 40
		}
		for _, p := range [][]float64{{3, 150}, {8, 250}, {15, 350}, {5, 300}, {12, 200}} {
			got, e := m.Predict(p)
			all++
			if math.Abs(got-response(p)) < 1.96*e {
				hits++
			}
		}
	}
	if part := float64(hits) / float64(all); part < 0.88 || part > 0.99 {
		t.Errorf("%.1f %% of the intervals hold the truth", 100*part)
	}
	if math.Abs(math.Sqrt(sum)-1) > 0.25 {
		t.Errorf("left out points deviate by %.2f of their errors", math.Sqrt(sum))
	}
}

// Goal: an input that changes nothing gets a great length, and errors grow away from the points.
func TestLengthsAndErrors(t *testing.T) {
	x := settings(25)
	var y, se []float64
	for _, p := range x {
		y, se = append(y, math.Sin(p[0])), append(se, 0.01)
	}
	m, err := Fit(box(x, y, se))
	if err != nil {
		t.Fatal(err)
	}
	l := m.Lengths()
	if l[0]/19 > 0.5*l[1]/300 {
		t.Errorf("lengths %.3g of 19 and %.3g of 300: the second input changes nothing", l[0], l[1])
	}
	_, near := m.Predict(x[3])
	_, far := m.Predict([]float64{40, 800})
	if far < 3*near {
		t.Errorf("error %.3g at a point and %.3g far outside", near, far)
	}
}

// Goal: a constant result is predicted as such, not divided by its spread of 0.
func TestConstant(t *testing.T) {
	x := settings(6)
	m, err := Fit(box(x, []float64{7, 7, 7, 7, 7, 7}, nil))
	if err != nil {
		t.Fatal(err)
	}
	if got, se := m.Predict([]float64{9, 222}); math.Abs(got-7) > 1e-6 || !(se >= 0) {
		t.Errorf("got %g +- %g, want 7", got, se)
	}
}

func TestBadData(t *testing.T) {
	x := settings(4)
	y := []float64{1, 2, 3, 4}
	for _, c := range []struct {
		data Data
		want string
	}{
		{box(x[:2], y[:2], nil), "2 settings, 2 results and 0 errors"},
		{box(x, y, []float64{1}), "4 settings, 4 results and 1 errors"},
		{box(x, []float64{1, 2, math.NaN(), 4}, nil), "point 2 is not finite"},
		{box(x, y, []float64{1, -1, 1, 1}), "the error of point 1 is -1"},
		{Data{Low: []float64{1}, High: []float64{1}, X: x, Y: y}, "want a range"},
		{Data{X: x, Y: y}, "want as many of both"},
		{Data{Low: []float64{1}, High: []float64{2}, X: x, Y: y}, "point 0 has 2 inputs, want 1"},
	} {
		if _, err := Fit(c.data); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("got %v, want %q", err, c.want)
		}
	}
}
