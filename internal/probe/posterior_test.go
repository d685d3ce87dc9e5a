package probe

import (
	"math"
	"strings"
	"testing"

	"ionfall/internal/rng"
)

const caseText = `gap: 0.04 m
gas: {pressure: 5 Pa, temperature: 300 K, mixture: {Ar: 1}}
drive: {tones: [{frequency: 13560000 Hz, amplitude: 250 V}]}
electrodes:
  powered: {ion_secondary_yield: 0.05}
  grounded: {ion_secondary_yield: 0.1}
`

// Goal: free inputs and their priors are read, and wrong ones refused with a reason. Method: each
// form of a prior; parts of the messages.
func TestParseInput(t *testing.T) {
	for text, want := range map[string]Input{
		"drive.tones.0.amplitude(5 %)": {
			Lo: 218.75, Hi: 281.25, Mean: 250, Sigma: 12.5, Unit: "V", Nominal: 250,
		},
		"drive.tones.0.amplitude(+- 0.01 kV)": {
			Lo: 225, Hi: 275, Mean: 250, Sigma: 10, Unit: "V", Nominal: 250,
		},
		"gas.temperature(300 K..450 K)":      {Lo: 300, Hi: 450, Unit: "K", Nominal: 300},
		"gas.pressure(30 mTorr .. 6 Pa)":     {Lo: 3.99967105263158, Hi: 6, Unit: "Pa", Nominal: 5},
		"electrodes.*.ion_secondary_yield":   {Lo: 0, Hi: 0.3, Nominal: 0.05},
		"electrodes.*.ion_secondary_yield()": {Lo: 0, Hi: 0.3, Nominal: 0.05},
	} {
		got, err := ParseInput(text, []byte(caseText))
		if err != nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		want.Path, _, _ = strings.Cut(text, "(")
		for i, pair := range [][2]float64{
			{got.Lo, want.Lo},
			{got.Hi, want.Hi},
			{got.Mean, want.Mean},
			{got.Sigma, want.Sigma},
			{got.Nominal, want.Nominal},
		} {
			if math.Abs(pair[0]-pair[1]) > 1e-9*math.Max(1, pair[1]) {
				t.Errorf("%s: number %d is %g, want %g", text, i, pair[0], pair[1])
			}
		}
		if got.Path != want.Path || got.Unit != want.Unit {
			t.Errorf("%s: got %q in %q", text, got.Path, got.Unit)
		}
	}
	for text, want := range map[string]string{
		"gas.temprature(5 %)":            "there are pressure, temperature, mixture",
		"gas.temperature":                "no usual prior",
		"gas.temperature(5":              "no closing bracket",
		"gas.temperature(450 K..300 K)":  "from low to high",
		"gas.temperature(300 Pa..400 K)": "300 Pa",
		"gas(5 %)":                       "no single value",
	} {
		if _, err := ParseInput(text, []byte(caseText)); err == nil ||
			!strings.Contains(err.Error(), want) {
			t.Errorf("%s: got %v, want %q", text, err, want)
		}
	}
}

// Goal: values go where the path says. Method: both electrodes through a star.
func TestWith(t *testing.T) {
	f, err := ParseInput("electrodes.*.ion_secondary_yield", []byte(caseText))
	if err != nil {
		t.Fatal(err)
	}
	out, err := With([]byte(caseText), []Input{*f}, []float64{0.2})
	if err != nil {
		t.Fatal(err)
	}
	if n := strings.Count(string(out), "ion_secondary_yield: 0.2"); n != 2 {
		t.Errorf("%d yields changed, want 2:\n%s", n, out)
	}
}

// linearProblem has two inputs in 0..1 and data that are linear in them.
func linearProblem(slopes [][2]float64, data []float64, se float64) *Problem {
	p := &Problem{
		Inputs:    []Input{{Path: "a", Hi: 1}, {Path: "b", Hi: 1}},
		Predicted: []Named{{Key: "sum", Label: "sum", Quantity: Quantity{}}},
		Seed:      1,
	}
	stream := rng.Key{Seed: 3, Purpose: rng.Resampling, Chunk: 21}.Stream()
	noisy := func(x float64) Quantity {
		return Quantity{Value: x + 1e-3*stream.Normal(), SE: 1e-3}
	}
	for i := range 14 {
		place := HaltonPlace(i+1, 2)
		point := Point{Place: place}
		for _, s := range slopes {
			point.Simulated = append(point.Simulated, noisy(s[0]*place[0]+s[1]*place[1]))
		}
		point.Predicted = []Quantity{noisy(place[0] + place[1])}
		p.Points = append(p.Points, point)
	}
	for i, x := range data {
		p.Data = append(p.Data, Datum{Quantity: Quantity{Value: x, SE: se}})
		row := make([]float64, len(data))
		row[i] = se * se
		p.Covariance = append(p.Covariance, row)
	}
	return p
}

// Goal: the posterior is the exact one where that is known. Method: linear data with normal errors
// give a normal posterior, inverse of the sum of squared slopes; 2000 draws know its width to 2 %.
func TestPosteriorLinear(t *testing.T) {
	p := linearProblem([][2]float64{{1, 0.5}, {-0.5, 1}}, []float64{0.6, 0.2}, 0.05)
	post, err := p.Solve()
	if err != nil {
		t.Fatal(err)
	}
	// Both columns of slopes have the square 1.25 and are orthogonal.
	want := [2]float64{(0.6 - 0.5*0.2) / 1.25, (0.5*0.6 + 0.2) / 1.25}
	for i := range want {
		mean, sd := Moments(post.Draws, i)
		near(t, "mean", mean, want[i], 0.02)
		near(t, "width", sd, 0.05/math.Sqrt(1.25), 0.12)
	}
	if r := Correlation(post.Draws, 0, 1); math.Abs(r) > 0.12 {
		t.Errorf("correlation %.2f, want 0", r)
	}
	_, before := Moments(post.Prior, 2)
	_, after := Moments(post.Draws, 2)
	near(t, "width of the sum before", before, math.Sqrt(2.0/12), 0.05)
	near(t, "width of the sum after", after, 0.05/math.Sqrt(1.25)*math.Sqrt2, 0.12)
	if !post.Fits() || len(post.Findings()) != 0 {
		t.Errorf("findings %q", post.Findings())
	}
}

// Goal: what data cannot tell is said. Method: data that know only the sum; data that nothing in
// the priors gives; data that do not depend on an input.
func TestFindings(t *testing.T) {
	for name, c := range map[string]struct {
		problem *Problem
		want    string
	}{
		"tied": {
			linearProblem([][2]float64{{1, 1}, {2, 2.02}}, []float64{1, 2.01}, 0.02),
			"the data cannot tell a and b apart",
		},
		"no fit": {
			linearProblem([][2]float64{{1, 0}, {1, 0}, {0, 1}}, []float64{0.2, 0.9, 0.5}, 0.02),
			"no value within the priors fits",
		},
		"nothing learned": {
			linearProblem([][2]float64{{1, 0}}, []float64{0.5}, 0.02),
			"the data say next to nothing about b",
		},
		"end of the prior": {
			linearProblem([][2]float64{{1, 0}, {0, 1}}, []float64{0.99, 0.5}, 0.02),
			"a lies at an end of its prior",
		},
	} {
		post, err := c.problem.Solve()
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if text := strings.Join(post.Findings(), "\n"); !strings.Contains(text, c.want) {
			t.Errorf("%s: got %q, want %q", name, text, c.want)
		}
	}
}

// Goal: units do not matter, though densities and volts differ by many powers of ten. Method: the
// linear problem with one of the data, its error and its simulations in units of 1e-16.
func TestPosteriorUnits(t *testing.T) {
	p := linearProblem([][2]float64{{1, 0.5}, {-0.5, 1}}, []float64{0.6, 0.2}, 0.05)
	const unit = 1e16
	p.Data[0].Value, p.Data[0].SE = p.Data[0].Value*unit, p.Data[0].SE*unit
	p.Covariance[0][0] *= unit * unit
	for i := range p.Points {
		q := &p.Points[i].Simulated[0]
		q.Value, q.SE = q.Value*unit, q.SE*unit
	}
	post, err := p.Solve()
	if err != nil {
		t.Fatal(err)
	}
	mean, sd := Moments(post.Draws, 0)
	near(t, "mean", mean, (0.6-0.5*0.2)/1.25, 0.02)
	near(t, "width", sd, 0.05/math.Sqrt(1.25), 0.12)
}
