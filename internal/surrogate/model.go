package surrogate

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// MaxSamples bounds the work, which grows as the cube of the number of samples.
const MaxSamples = 2000

// Sample is a known value.
type Sample struct {
	X      []float64 // inputs
	Value  float64
	StdErr float64 // standard error of the value, 0 for an exact one
}

// Model is a fitted surrogate. It is not changed by use, so goroutines may share it.
type Model struct {
	low, span    []float64 // of the inputs
	x            [][]float64
	scale, shift float64 // of the values
	values       []float64
	noise        []float64 // variances of the values
	likely       *process  // with the most likely parameters
	draws        []*process
}

// params are what the likelihood decides.
type params struct {
	amplitude float64   // s, in standard deviations of the samples
	lengths   []float64 // l, in ranges of the inputs
}

// process is a Gaussian process with given parameters, conditioned on the samples.
type process struct {
	params      params
	chol        mat.Cholesky
	constant    float64
	constantVar float64
	ones        *mat.VecDense // K^-1 1
	weights     *mat.VecDense // K^-1 (y - constant)
}

// Fit finds the surrogate of the samples: at least two more than there are inputs, at
// different places in every input.
func Fit(samples []Sample) (*Model, error) {
	if err := checkSamples(samples); err != nil {
		return nil, err
	}
	d := len(samples[0].X)
	m := &Model{low: make([]float64, d), span: make([]float64, d)}
	for i := range d {
		low, high := math.Inf(1), math.Inf(-1)
		for _, s := range samples {
			low, high = math.Min(low, s.X[i]), math.Max(high, s.X[i])
		}
		if low == high {
			return nil, fmt.Errorf("surrogate: input %d is %g in all samples, want at least two values",
				i, low)
		}
		m.low[i], m.span[i] = low, high-low
	}
	m.normalize(samples)
	for _, s := range samples {
		m.x = append(m.x, m.scaled(s.X))
		m.noise = append(m.noise, s.StdErr*s.StdErr/(m.scale*m.scale))
	}
	best := m.mostLikely()
	var ok bool
	if m.likely, _, ok = m.condition(best); !ok {
		return nil, errSingular
	}
	m.draws = m.sampleParams(best)
	return m, nil
}

// Known returns the surrogate with a given amplitude, in the unit of the values, and lengths in
// those of the inputs: for few samples of a quantity whose kind is known well. It costs little.
func Known(samples []Sample, amplitude float64, lengths []float64) (*Model, error) {
	if len(samples) == 0 || len(samples[0].X) != len(lengths) {
		return nil, fmt.Errorf("surrogate: %d samples, want some with %d inputs", len(samples),
			len(lengths))
	}
	if err := checkFinite(samples); err != nil {
		return nil, err
	}
	d := len(lengths)
	m := &Model{low: make([]float64, d), span: make([]float64, d), scale: 1}
	for i := range d {
		m.span[i] = 1
	}
	for _, s := range samples {
		m.x, m.values = append(m.x, s.X), append(m.values, s.Value)
		m.noise = append(m.noise, s.StdErr*s.StdErr)
	}
	var ok bool
	if m.likely, _, ok = m.condition(params{amplitude, lengths}); !ok {
		return nil, errSingular
	}
	m.draws = []*process{m.likely}
	return m, nil
}

var errSingular = errors.New("surrogate: the covariance of the samples is singular: are samples " +
	"without error at one place?")

func checkSamples(samples []Sample) error {
	if len(samples) == 0 {
		return errors.New("surrogate: no samples")
	}
	d := len(samples[0].X)
	if d == 0 || len(samples) < d+2 || len(samples) > MaxSamples {
		return fmt.Errorf("surrogate: %d samples of %d inputs, want at least one input, two samples "+
			"more than inputs, and at most %d samples", len(samples), d, MaxSamples)
	}
	return checkFinite(samples)
}

func checkFinite(samples []Sample) error {
	d := len(samples[0].X)
	for i, s := range samples {
		if len(s.X) != d {
			return fmt.Errorf("surrogate: sample %d has %d inputs, the first has %d", i, len(s.X), d)
		}
		for _, v := range append([]float64{s.Value, s.StdErr}, s.X...) {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return fmt.Errorf("surrogate: sample %d is not finite: %+v", i, s)
			}
		}
		if s.StdErr < 0 {
			return fmt.Errorf("surrogate: sample %d has the standard error %g, want at least 0",
				i, s.StdErr)
		}
	}
	return nil
}

// normalize keeps the values with mean 0 and standard deviation 1.
func (m *Model) normalize(samples []Sample) {
	sum, squares := 0.0, 0.0
	for _, s := range samples {
		sum += s.Value
	}
	m.shift = sum / float64(len(samples))
	for _, s := range samples {
		squares += (s.Value - m.shift) * (s.Value - m.shift)
	}
	m.scale = math.Sqrt(squares / float64(len(samples)))
	if m.scale == 0 {
		m.scale = math.Max(math.Abs(m.shift), 1)
	}
	for _, s := range samples {
		m.values = append(m.values, (s.Value-m.shift)/m.scale)
	}
}

func (m *Model) scaled(x []float64) []float64 {
	u := make([]float64, len(x))
	for i := range x {
		u[i] = (x[i] - m.low[i]) / m.span[i]
	}
	return u
}

// kernel is the covariance of the values at two scaled places.
func (p params) kernel(a, b []float64) float64 {
	r2 := 0.0
	for i := range a {
		q := (a[i] - b[i]) / p.lengths[i]
		r2 += q * q
	}
	r := math.Sqrt(5 * r2)
	return p.amplitude * p.amplitude * (1 + r + r*r/3) * math.Exp(-r)
}

// nugget is added to the diagonal for the rounding, in amplitudes squared.
const nugget = 1e-9

// condition prepares predictions with the parameters. It returns, too, the logarithm of the
// restricted likelihood of the samples, up to a constant, and whether the covariance is regular.
func (m *Model) condition(p params) (c *process, logLikelihood float64, ok bool) {
	n := len(m.x)
	k := mat.NewSymDense(n, nil)
	for i := range n {
		for j := range i {
			k.SetSym(i, j, p.kernel(m.x[i], m.x[j]))
		}
		k.SetSym(i, i, p.amplitude*p.amplitude*(1+nugget)+m.noise[i])
	}
	c = &process{params: p}
	if !c.chol.Factorize(k) {
		return nil, math.Inf(-1), false
	}
	one := mat.NewVecDense(n, nil)
	for i := range n {
		one.SetVec(i, 1)
	}
	y := mat.NewVecDense(n, append([]float64(nil), m.values...))
	c.ones, c.weights = mat.NewVecDense(n, nil), mat.NewVecDense(n, nil)
	// An ill-conditioned solution is still one: the nugget bounds the condition number.
	_ = c.chol.SolveVecTo(c.ones, one)
	precision := mat.Dot(one, c.ones)
	c.constant, c.constantVar = mat.Dot(c.ones, y)/precision, 1/precision
	y.AddScaledVec(y, -c.constant, one)
	_ = c.chol.SolveVecTo(c.weights, y)
	l := -0.5*mat.Dot(y, c.weights) - 0.5*c.chol.LogDet() - 0.5*math.Log(precision)
	return c, l, !math.IsNaN(l)
}
