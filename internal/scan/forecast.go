package scan

import (
	"math"
	"slices"
	"time"

	"ionfall/internal/surrogate"
)

const (
	// timeSpread is the standard error taken for the logarithm of one run's time: the machine is
	// busy with other things, and how long a run averages is chance to some degree.
	timeSpread = 0.1
	// priorSpread is how far a run's time is from the estimate before anything has been run: a
	// factor of 3.
	priorSpread = 1.1
	// mostFitted bounds the points that a forecast is fitted to.
	mostFitted = 80
)

// forecast predicts how long points take. What is fitted is the logarithm of the time over the
// estimate made from the input: a Gaussian process of the axes where there are enough points,
// their mean else.
type forecast struct {
	estimate []float64 // of each point [s]
	where    [][]float64
	took     map[int]float64 // wall time of points that are done [s]

	fitted  int
	model   *surrogate.Model
	mean    float64
	spread  float64
	columns []int // of where, that differ among the fitted points
}

func newForecast(p *Plan, estimate []float64) *forecast {
	return &forecast{estimate: estimate, where: p.place(), took: map[int]float64{}}
}

// add enters the time that a point took.
func (f *forecast) add(i int, seconds float64) {
	if seconds > 0 {
		f.took[i] = seconds
	}
}

// fit renews the model when a fifth more points are known.
func (f *forecast) fit() {
	n := len(f.took)
	if n == 0 || f.fitted > 0 && 5*n < 6*f.fitted {
		return
	}
	f.fitted = n
	var known []int
	for i := range f.took {
		known = append(known, i)
	}
	slices.Sort(known)
	if len(known) > mostFitted { // evenly spread over the numbers
		var some []int
		for k := range mostFitted {
			some = append(some, known[k*len(known)/mostFitted])
		}
		known = some
	}
	ratios := make([]float64, len(known))
	sum, squares := 0.0, 0.0
	for k, i := range known {
		ratios[k] = math.Log(f.took[i] / f.estimate[i])
		sum += ratios[k]
	}
	f.mean = sum / float64(len(known))
	for _, r := range ratios {
		squares += (r - f.mean) * (r - f.mean)
	}
	f.spread = priorSpread / math.Sqrt(float64(len(known)))
	if len(known) > 2 {
		f.spread = math.Sqrt(squares / float64(len(known)-1))
	}
	f.surface(known, ratios)
}

// surface fits the dependence on the axes.
func (f *forecast) surface(known []int, ratios []float64) {
	f.model, f.columns = nil, nil
	for k := range f.where[0] {
		for _, i := range known {
			if f.where[i][k] != f.where[known[0]][k] {
				f.columns = append(f.columns, k)
				break
			}
		}
	}
	if len(f.columns) == 0 || len(known) < len(f.columns)+3 {
		return
	}
	var samples []surrogate.Sample
	for k, i := range known {
		samples = append(samples, surrogate.Sample{
			X: f.at(i), Value: ratios[k], StdErr: timeSpread,
		})
	}
	// Without a surface the mean has to do.
	f.model, _ = surrogate.Fit(samples)
}

func (f *forecast) at(i int) []float64 {
	var x []float64
	for _, k := range f.columns {
		x = append(x, f.where[i][k])
	}
	return x
}

// seconds predicts the time of a point, and the standard error of its logarithm.
func (f *forecast) seconds(i int) (expected, spread float64) {
	if len(f.took) == 0 {
		return f.estimate[i], priorSpread
	}
	f.fit()
	if f.model != nil {
		p := f.model.At(f.at(i))
		return f.estimate[i] * math.Exp(p.Mean), math.Hypot(p.StdErr, timeSpread)
	}
	return f.estimate[i] * math.Exp(f.mean), math.Max(f.spread, timeSpread)
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
