// Package stats turns what a run counted into estimates with standard errors.
//
// One observation is one RF period. Successive periods are correlated, most of all in the
// density, whose memory is the lifetime of an ion. Errors therefore come from batch means, with
// the correlation that is left between batches taken into account.
package stats

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// Estimate is a mean with its uncertainty.
type Estimate struct {
	Mean   float64
	StdErr float64 // standard error of the mean; NaN with fewer than MinBatches batches
	N      int     // batches
	Batch  int     // observations in a batch
	Lag    float64 // correlation of neighbouring batches, as used
}

// MinBatches is the smallest number of batches from which an error is stated.
const MinBatches = 10

// maxBatches is the number of batches from which lengthening them starts.
const maxBatches = 40

// Interval returns the half width of the two-sided confidence interval (Student's t).
func (e Estimate) Interval(level float64) float64 {
	// Correlated batches are worth fewer independent ones.
	dof := math.Max(1, float64(e.N)*(1-e.Lag)/(1+e.Lag)-1)
	t := distuv.StudentsT{Mu: 0, Sigma: 1, Nu: dof}
	return t.Quantile(0.5+0.5*level) * e.StdErr
}

// Mean estimates the mean of a correlated series.
//
// Batches are lengthened until neighbours are not significantly correlated or only MinBatches to
// 2 MinBatches are left; the lag-1 correlation r that remains, corrected for the bias of a
// short series, widens the error by (1+r)/(1-r), the factor of a first-order autoregression.
//
// Refs: H. Flyvbjerg and H. G. Petersen, J. Chem. Phys. 91, 461 (1989) for lengthening the
// batches; M. H. Quenouille's bias of a serial correlation, Biometrika 36, 1 (1949) (from memory).
func Mean(series []float64) Estimate {
	var e Estimate
	for length := max(1, len(series)/maxBatches); ; length++ {
		n := len(series) / length
		if n < MinBatches {
			if e.N == 0 {
				return Estimate{Mean: mean(series), StdErr: math.NaN(), N: n, Batch: length}
			}
			return e
		}
		e = fromBatches(batches(series, length), length)
		// Of the whole series, also of what fills no batch: sums of tables agree with it.
		e.Mean = mean(series)
		if e.Lag < 2/math.Sqrt(float64(n)) {
			return e
		}
	}
}

// batches averages stretches of the series; what does not fill one is left out at the start.
func batches(series []float64, length int) []float64 {
	n := len(series) / length
	rest := series[len(series)-n*length:]
	list := make([]float64, n)
	for i := range list {
		list[i] = mean(rest[i*length : (i+1)*length])
	}
	return list
}

func mean(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x
	}
	return sum / float64(len(v))
}

func fromBatches(b []float64, length int) Estimate {
	n := float64(len(b))
	m := mean(b)
	var s2, lag float64
	for i, x := range b {
		s2 += (x - m) * (x - m)
		if i > 0 {
			lag += (x - m) * (b[i-1] - m)
		}
	}
	r := 0.0
	if s2 > 0 {
		r = lag / s2
		r = math.Max(0, math.Min(0.9, r+(1+3*r)/n))
	}
	s2 /= n - 1
	return Estimate{
		Mean: m, StdErr: math.Sqrt(s2 / n * (1 + r) / (1 - r)),
		N: len(b), Batch: length, Lag: r,
	}
}

// Ratio estimates sum(a)/sum(b) for paired correlated series: the error is that of the series
// a - R b, divided by the mean of b (the linearised ratio).
func Ratio(a, b []float64) Estimate {
	var sa, sb float64
	for i := range a {
		sa += a[i]
		sb += b[i]
	}
	if sb == 0 {
		return Estimate{Mean: math.NaN(), StdErr: math.NaN()}
	}
	r := sa / sb
	rest := make([]float64, len(a))
	for i := range a {
		rest[i] = (a[i] - r*b[i]) * float64(len(b)) / sb
	}
	e := Mean(rest)
	e.Mean = r
	return e
}

// Drift compares the first and the last third of a series: the difference of their
// means, with its standard error from the correlation within the thirds. A steady series gives a
// difference within a few errors.
//
// Ref: J. Geweke, in Bayesian Statistics 4 (1992), p. 169 (from memory).
func Drift(series []float64) (difference, stdErr float64) {
	n := len(series) / 3
	first, last := Mean(series[:n]), Mean(series[len(series)-n:])
	return last.Mean - first.Mean, math.Hypot(first.StdErr, last.StdErr)
}

// Vector accumulates batch means of many values at once.
type Vector struct {
	N            int
	Mean, M2     []float64
	Last, LagSum []float64 // the batch before, and the sum of products of neighbours' deviations
}

// NewVector returns an empty accumulator of n values.
func NewVector(n int) *Vector {
	return &Vector{
		Mean: make([]float64, n), M2: make([]float64, n),
		Last: make([]float64, n), LagSum: make([]float64, n),
	}
}

// Add takes one batch (Welford's recurrence, B. P. Welford, Technometrics 4, 419 (1962)).
func (v *Vector) Add(batch []float64) {
	v.N++
	inverse := 1 / float64(v.N)
	for i, x := range batch {
		d := x - v.Mean[i]
		if v.N > 1 {
			v.LagSum[i] += d * (v.Last[i] - v.Mean[i])
		}
		v.Mean[i] += d * inverse
		v.M2[i] += d * (x - v.Mean[i])
		v.Last[i] = x
	}
}

// StdErr returns the standard error of value i, widened for the correlation of neighbouring
// batches; NaN with fewer than MinBatches batches.
func (v *Vector) StdErr(i int) float64 {
	if v.N < MinBatches {
		return math.NaN()
	}
	if v.M2[i] <= 0 {
		return 0
	}
	n := float64(v.N)
	r := math.Max(0, math.Min(0.9, v.LagSum[i]/v.M2[i]))
	return math.Sqrt(v.M2[i] / (n - 1) / n * (1 + r) / (1 - r))
}

// StdErrs returns all standard errors.
func (v *Vector) StdErrs() []float64 {
	list := make([]float64, len(v.Mean))
	for i := range list {
		list[i] = v.StdErr(i)
	}
	return list
}
