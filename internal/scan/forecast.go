package scan

import (
	"maps"
	"math"
	"slices"
	"time"

	"ionfall/internal/surrogate"
)

const (
	// timeSpread is the standard error taken for the logarithm of one run's time: how long a run
	// settles and averages is chance to some degree, as the recorded times in the tests show, and the
	// machine is busy with other things.
	timeSpread = 0.2
	// priorSpread is how far a run's time is from the estimate before anything has been run: a
	// factor of 3.
	priorSpread = 1.1
	// timeAmplitude and timeLength are those of the surrogate of the logarithm of the time over the
	// estimate, on axes from 0 to 1: smooth surfaces with a change of a factor of 1.5 or so along an
	// axis, and little bend. So few points are known at first that they cannot tell this
	// themselves.
	timeAmplitude, timeLength = 1.0, 3.0
	// mostFitted bounds the points that a forecast is fitted to.
	mostFitted = 80
)

// forecast predicts how long points take. What is fitted is the logarithm of the time over the
// estimate made from the input, as a Gaussian process of the axes.
type forecast struct {
	estimate []float64 // of each point [s]
	where    [][]float64
	took     map[int]float64 // wall time of points that are done [s]

	fitted   int       // points that the predictions are fitted to
	expected []float64 // of each point [s]
	spread   []float64 // standard errors of the logarithms
}

func newForecast(p *Plan, estimate []float64) *forecast {
	f := &forecast{estimate: estimate, where: p.place(), took: map[int]float64{}}
	f.expected = estimate
	for range estimate {
		f.spread = append(f.spread, priorSpread)
	}
	return f
}

// add enters the time that a point took.
func (f *forecast) add(i int, seconds float64) {
	if seconds > 0 {
		f.took[i] = seconds
	}
}

// fit renews the predictions when a tenth more points are known.
func (f *forecast) fit() {
	n := len(f.took)
	if n == 0 || f.fitted > 0 && 10*n < 11*f.fitted {
		return
	}
	f.fitted = n
	known := slices.Sorted(maps.Keys(f.took))
	if len(known) > mostFitted { // evenly spread over the numbers
		var some []int
		for k := range mostFitted {
			some = append(some, known[k*len(known)/mostFitted])
		}
		known = some
	}
	var samples []surrogate.Sample
	for _, i := range known {
		samples = append(samples, surrogate.Sample{
			X: f.where[i], Value: math.Log(f.took[i] / f.estimate[i]), StdErr: timeSpread,
		})
	}
	lengths := make([]float64, len(f.where[0]))
	for k := range lengths {
		lengths[k] = timeLength
	}
	m, err := surrogate.Known(samples, timeAmplitude, lengths)
	if err != nil {
		return // the estimates have to do: with an error for each sample this does not happen
	}
	f.expected, f.spread = make([]float64, len(f.estimate)), make([]float64, len(f.estimate))
	for i := range f.expected {
		p := m.At(f.where[i])
		f.expected[i] = f.estimate[i] * math.Exp(p.Mean)
		f.spread[i] = math.Hypot(p.StdErr, timeSpread)
	}
}

// seconds predicts the time of a point, and the standard error of its logarithm.
func (f *forecast) seconds(i int) (expected, spread float64) {
	f.fit()
	return f.expected[i], f.spread[i]
}

// remaining predicts what is left of a run that has gone on for the elapsed seconds and itself says
// how much that is, below 0 for nothing. At the start of its average a run knows its error badly
// and tends to say too much: then the truth is likely between both.
func (f *forecast) remaining(i int, elapsed, own float64) float64 {
	expected, _ := f.seconds(i)
	// A run that takes longer than expected is likely to go on for a while.
	foreseen := max(0.1*expected, expected-elapsed, 0.3*elapsed)
	if own < 0 {
		return foreseen
	}
	return min(own, math.Sqrt(own*max(0.1*expected, expected-elapsed)))
}

// Left is a prediction of the time to the end of a scan.
type Left struct {
	Expected, Low, High time.Duration // the interval holds it in about two of three cases
}

// left predicts the time that the points todo take on the cores, in their order, after the running
// ones, whose remaining seconds are given.
func (f *forecast) left(todo []int, running []float64, cores int) Left {
	free := make([]float64, max(1, cores))
	for k, seconds := range running {
		free[k%len(free)] += seconds
	}
	squares, sum := 0.0, 0.0
	for _, s := range running {
		sum += s
	}
	for _, i := range todo {
		expected, spread := f.seconds(i)
		earliest := 0
		for k := range free {
			if free[k] < free[earliest] {
				earliest = k
			}
		}
		free[earliest] += expected
		sum += expected
		// Errors of neighbouring points go together: they are added, not their squares.
		squares += expected * spread
	}
	seconds := slices.Max(free)
	relative := 0.0
	if sum > 0 {
		relative = squares / sum
	}
	as := func(s float64) time.Duration {
		return time.Duration(math.Min(s, 1e9) * float64(time.Second))
	}
	return Left{as(seconds), as(seconds * math.Exp(-relative)), as(seconds * math.Exp(relative))}
}
