package stats

import (
	"math"
	"math/rand/v2"
	"testing"
)

// autoregressive returns n values of x' = rho x + noise, variance 1, mean 10.
func autoregressive(r *rand.Rand, n int, rho float64) []float64 {
	series := make([]float64, n)
	x := r.NormFloat64()
	for i := range series {
		x = rho*x + math.Sqrt(1-rho*rho)*r.NormFloat64()
		series[i] = 10 + x
	}
	return series
}

// Goal: 95 % intervals hold the truth about 95 times in 100, for white noise and for memories of
// 2 to 30 observations in 600. Method: 2000 series each; the band 90 to 98 % is what the method
// promises for memories below a twentieth of the series (binomial scatter is 0.5 %).
func TestMeanCovers(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	for _, rho := range []float64{0, 0.5, 0.9, 0.967} {
		const trials = 2000
		hits := 0
		for range trials {
			e := Mean(autoregressive(r, 600, rho))
			if math.Abs(e.Mean-10) < e.Interval(0.95) {
				hits++
			}
		}
		if part := float64(hits) / trials; part < 0.90 || part > 0.98 {
			t.Errorf("memory %g: %.1f %% of the intervals hold the mean", rho, 100*part)
		}
	}
}

// Goal: the error of a ratio. Method: numerator and denominator share their noise; the spread
// over 2000 series is compared with the mean quoted error, within 10 %.
func TestRatioError(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 2))
	var sum, sum2, quoted float64
	const trials = 2000
	for range trials {
		b := autoregressive(r, 300, 0.5)
		a := make([]float64, len(b))
		for i := range a {
			a[i] = 3*b[i] + r.NormFloat64()
		}
		e := Ratio(a, b)
		sum += e.Mean
		sum2 += e.Mean * e.Mean
		quoted += e.StdErr
	}
	spread := math.Sqrt(sum2/trials - sum/trials*sum/trials)
	if ratio := quoted / trials / spread; ratio < 0.9 || ratio > 1.1 {
		t.Errorf("quoted error is %.3f of the spread", ratio)
	}
}

func TestDrift(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 3))
	alarms := 0
	const trials = 2000
	for range trials {
		d, se := Drift(autoregressive(r, 900, 0.8))
		if math.Abs(d) > 3*se {
			alarms++
		}
	}
	// Three errors of a t-like ratio: about 1 % by chance.
	if alarms > 80 {
		t.Errorf("%d of %d steady series called drifting", alarms, trials)
	}
	series := autoregressive(r, 900, 0.8)
	for i := range series {
		series[i] += 3 * float64(i) / 900
	}
	if d, se := Drift(series); d < 5*se || math.Abs(d-2) > 5*se {
		t.Errorf("a drift of 2 is seen as %.2f +- %.2f", d, se)
	}
}

// Goal: the mean is that of every observation, whatever length the batches take.
func TestMeanIsOfTheWholeSeries(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 5))
	for _, n := range []int{10, 37, 83, 304, 601} {
		series := autoregressive(r, n, 0.9)
		if e, m := Mean(series), mean(series); math.Abs(e.Mean-m) > 1e-12 {
			t.Errorf("%d observations, batches of %d: mean %v, want %v", n, e.Batch, e.Mean, m)
		}
	}
}

func TestFewBatchesHaveNoError(t *testing.T) {
	if e := Mean([]float64{1, 2, 3}); !math.IsNaN(e.StdErr) || e.Mean != 2 {
		t.Errorf("three values give %+v", e)
	}
}

// Goal: a vector's means and errors equal those of its columns.
func TestVector(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 4))
	series := autoregressive(r, 40, 0)
	v := NewVector(2)
	for _, x := range series {
		v.Add([]float64{x, -2 * x})
	}
	m, s := mean(series), 0.0
	for _, x := range series {
		s += (x - m) * (x - m)
	}
	plain := math.Sqrt(s / 39 / 40)
	if math.Abs(v.Mean[0]-m) > 1e-12 || math.Abs(v.Mean[1]+2*m) > 1e-12 {
		t.Errorf("means %v, want %v", v.Mean, m)
	}
	if se := v.StdErr(0); se < 0.999*plain || se > 2*plain || math.Abs(v.StdErr(1)-2*se) > 1e-12 {
		t.Errorf("errors %v %v, want at least %v", se, v.StdErr(1), plain)
	}
}
