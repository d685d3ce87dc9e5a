package surrogate

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
)

// wave is a smooth function of two inputs, drawn at random; it is no draw of the process.
func wave(r *rand.Rand) func(x []float64) float64 {
	a, b, c, d := r.NormFloat64(), r.NormFloat64(), 1+2*r.Float64(), 2*math.Pi*r.Float64()
	return func(x []float64) float64 {
		return 3 + a*x[0]/20 + b*x[1]*x[1]/1e4 + math.Sin(c*x[0]/10+d) + 0.5*math.Cos(c*x[1]/50)
	}
}

func sampled(r *rand.Rand, f func([]float64) float64, n int, noise float64) []Sample {
	var list []Sample
	for range n {
		x := []float64{20 * r.Float64(), 100 * r.Float64()}
		list = append(list, Sample{X: x, Value: f(x) + noise*r.NormFloat64(), StdErr: noise})
	}
	return list
}

// likelyAt predicts with given parameters alone.
func likelyAt(t *testing.T, m *Model, p params, x []float64) Prediction {
	t.Helper()
	c, _, ok := m.condition(p)
	if !ok {
		t.Fatal("singular")
	}
	one := *m
	one.draws = []*process{c}
	return one.At(x)
}

func fit(t *testing.T, samples []Sample) *Model {
	t.Helper()
	m, err := Fit(samples)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// Goal: the quoted errors are those of the predictions. Method: many functions, many places
// within the samples; the part within 1.96 errors. The parameters are estimated from 30 samples, so
// it may fall short of 95 %, but not by much; and the errors must not be idly large.
func TestIntervalsHold(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	inside, all, squares := 0, 0, 0.0
	for range 40 {
		f := wave(r)
		m := fit(t, sampled(r, f, 30, 0.1))
		for range 25 {
			x := []float64{20 * r.Float64(), 100 * r.Float64()}
			p := m.At(x)
			z := (p.Mean - f(x)) / p.StdErr
			if math.Abs(z) < 1.96 {
				inside++
			}
			squares += z * z
			all++
		}
	}
	part, spread := float64(inside)/float64(all), math.Sqrt(squares/float64(all))
	t.Logf("%.1f %% within 1.96 errors, spread %.2f", 100*part, spread)
	if part < 0.9 || part > 0.985 {
		t.Errorf("%.1f %% of the predictions are within 1.96 errors, want about 95 %%", 100*part)
	}
}

// Goal: a sample without error is met, and one with a large error does not bend the surface.
// Method: an outlier with its honest error among exact samples.
func TestErrorsWeigh(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	f := wave(r)
	samples := sampled(r, f, 25, 0)
	place := []float64{10, 50}
	samples = append(samples, Sample{X: place, Value: f(place) + 5, StdErr: 5})
	m := fit(t, samples)
	for i, s := range samples[:25] {
		if p := m.At(s.X); math.Abs(p.Mean-s.Value) > 1e-3 || p.StdErr > 1e-2 {
			t.Errorf("sample %d: got %g +- %g, want %g", i, p.Mean, p.StdErr, s.Value)
		}
	}
	if p := m.At(place); math.Abs(p.Mean-f(place)) > 0.5 {
		t.Errorf("the outlier bends the surface: got %g, want %g", p.Mean, f(place))
	}
}

// Goal: the lengths tell which input matters. Method: a function of the first input only.
func TestLengthsTellWhatMatters(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	f := func(x []float64) float64 { return math.Sin(x[0] / 3) }
	l := fit(t, sampled(r, f, 40, 0.02)).Lengths()
	if l[0] > 20 || l[1] < 300 {
		t.Errorf("got lengths %g of a range of 20 and %g of a range of 100", l[0], l[1])
	}
}

// Goal: the parameters are recovered. Method: draws of a process with known ones on a line; the
// median of the length over draws.
func TestParametersAreRecovered(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	sum, n := 0.0, 12
	for range n {
		truth := &Model{}
		var samples []Sample
		truth.low, truth.span = []float64{0}, []float64{1}
		for i := range 40 {
			truth.x = append(truth.x, []float64{float64(i) / 39})
			truth.values = append(truth.values, 0)
		}
		for range 40 {
			truth.noise = append(truth.noise, 0.01)
		}
		c, _, ok := truth.condition(params{amplitude: 2, lengths: []float64{0.3}})
		if !ok {
			t.Fatal("singular")
		}
		u := c.chol.RawU()
		z := make([]float64, 40)
		for i := range z {
			z[i] = r.NormFloat64()
		}
		for i, x := range truth.x { // y = L z with K = L L^T, L the transpose of U
			y := 0.0
			for j := 0; j <= i; j++ {
				y += u.At(j, i) * z[j]
			}
			samples = append(samples, Sample{X: x, Value: y, StdErr: 0.1})
		}
		sum += math.Log(fit(t, samples).Lengths()[0] / 0.3)
	}
	// The length is known to a factor of about 1.5 a draw: the mean of 12 to 0.12 in the logarithm.
	if mean := sum / float64(n); math.Abs(mean) > 0.5 {
		t.Errorf("mean logarithm of the length over the true one: %g", mean)
	}
}

// Goal: residuals are those of leaving out. Method: condition on all but one with the same
// parameters.
func TestResidualsLeaveOneOut(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	samples := sampled(r, wave(r), 20, 0.1)
	m := fit(t, samples)
	z := m.Residuals()
	for i := range samples {
		rest := &Model{low: m.low, span: m.span, scale: m.scale, shift: m.shift}
		for j := range samples {
			if j != i {
				rest.x, rest.values = append(rest.x, m.x[j]), append(rest.values, m.values[j])
				rest.noise = append(rest.noise, m.noise[j])
			}
		}
		p := likelyAt(t, rest, m.likely.params, samples[i].X)
		want := (samples[i].Value - p.Mean) / math.Hypot(p.StdErr, samples[i].StdErr)
		if math.Abs(z[i]-want) > 1e-4 {
			t.Errorf("sample %d: got %g, want %g", i, z[i], want)
		}
	}
}

// Goal: far away the error is honest: as large as the quantity varies. Method: a place ten ranges
// off.
func TestFarAwayIsUnknown(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	p := fit(t, sampled(r, wave(r), 30, 0.05)).At([]float64{400, 2000})
	if p.StdErr < 0.5 {
		t.Errorf("got an error of %g", p.StdErr)
	}
}

func TestConstantIsNoFailure(t *testing.T) {
	var samples []Sample
	for i := range 6 {
		samples = append(samples, Sample{X: []float64{float64(i)}, Value: 7, StdErr: 0.1})
	}
	if p := fit(t, samples).At([]float64{2.5}); math.Abs(p.Mean-7) > 1e-6 || p.StdErr > 0.5 {
		t.Errorf("got %+v", p)
	}
}

func TestBadSamples(t *testing.T) {
	x := func(v ...float64) []float64 { return v }
	for want, samples := range map[string][]Sample{
		"no samples": nil,
		"2 samples of 1 inputs": {
			{X: x(1), Value: 1}, {X: x(2), Value: 2},
		},
		"sample 1 has 2 inputs": {{X: x(1)}, {X: x(1, 2)}, {X: x(3)}},
		"sample 2 is not finite": {
			{X: x(1)}, {X: x(2)}, {X: x(3), StdErr: math.NaN()},
		},
		"standard error -1": {{X: x(1), StdErr: -1}, {X: x(2)}, {X: x(3)}},
		"input 0 is 4":      {{X: x(4)}, {X: x(4)}, {X: x(4)}},
	} {
		if _, err := Fit(samples); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want %s", err, want)
		}
	}
}

func TestAbove(t *testing.T) {
	p := Prediction{Mean: 1, StdErr: 2}
	if got, want := p.Above(3), 1-distuv.UnitNormal.CDF(1); math.Abs(got-want) > 1e-12 {
		t.Errorf("got %g, want %g", got, want)
	}
	exact := Prediction{Mean: 1}
	if exact.Above(0) != 1 || exact.Above(2) != 0 || exact.Above(1) != 0.5 {
		t.Error("an exact value is above or below")
	}
}

func Example() {
	var samples []Sample
	for i := range 9 {
		x := float64(i)
		samples = append(samples, Sample{X: []float64{x}, Value: x * x, StdErr: 0.01})
	}
	m, err := Fit(samples)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%.0f\n", m.At([]float64{4.5}).Mean)
	// Output: 20
}

// Goal: joint predictions agree with single ones, and their covariances tell what a further sample
// would teach. Method: the variance at one place given an exact sample at another, against a model
// with that sample and the same parameters.
func TestJointPredictions(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 14))
	f := wave(r)
	samples := sampled(r, f, 20, 0.1)
	m := fit(t, samples)
	places := [][]float64{{3, 40}, {5, 45}, {18, 90}}
	mean, cov := m.Joint(places)
	for i, x := range places {
		p := likelyAt(t, m, m.likely.params, x)
		if math.Abs(mean[i]-p.Mean) > 1e-9 || math.Abs(math.Sqrt(cov.At(i, i))-p.StdErr) > 1e-9 {
			t.Errorf("place %d: got %g +- %g, want %+v", i, mean[i], math.Sqrt(cov.At(i, i)), p)
		}
	}
	more := &Model{low: m.low, span: m.span, scale: m.scale, shift: m.shift}
	for _, s := range append(samples, Sample{X: places[1], Value: f(places[1])}) {
		more.x = append(more.x, m.scaled(s.X))
		more.values = append(more.values, (s.Value-m.shift)/m.scale)
		more.noise = append(more.noise, square(s.StdErr/m.scale))
	}
	want := likelyAt(t, more, m.likely.params, places[0]).StdErr
	got := math.Sqrt(cov.At(0, 0) - square(cov.At(0, 1))/cov.At(1, 1))
	if math.Abs(got-want) > 1e-6 {
		t.Errorf("with one more sample the error would be %g, want %g", got, want)
	}
}
