package surrogate

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// Data are results at settings.
type Data struct {
	Low, High []float64   // the box of the settings, by input; inputs are scaled with it
	X         [][]float64 // points x inputs
	Y         []float64   // results
	SE        []float64   // their standard errors; nil for exact results
}

// check reports what keeps the data from being fitted.
func (d *Data) check() error {
	if len(d.Low) == 0 || len(d.Low) != len(d.High) {
		return fmt.Errorf("surrogate: %d lower and %d upper bounds of inputs, want as many of both, "+
			"at least 1", len(d.Low), len(d.High))
	}
	for k := range d.Low {
		if !(d.High[k] > d.Low[k]) || math.IsInf(d.High[k]-d.Low[k], 0) {
			return fmt.Errorf("surrogate: input %d lies between %g and %g, want a range", k, d.Low[k],
				d.High[k])
		}
	}
	n := len(d.X)
	if n < MinPoints || len(d.Y) != n || d.SE != nil && len(d.SE) != n {
		return fmt.Errorf("surrogate: %d settings, %d results and %d errors, want as many of each, "+
			"at least %d", n, len(d.Y), len(d.SE), MinPoints)
	}
	for i, x := range d.X {
		if len(x) != len(d.Low) {
			return fmt.Errorf("surrogate: point %d has %d inputs, want %d", i, len(x), len(d.Low))
		}
		for _, v := range append([]float64{d.Y[i]}, x...) {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return fmt.Errorf("surrogate: point %d is not finite: %v gives %g", i, x, d.Y[i])
			}
		}
		if d.SE != nil && !(d.SE[i] >= 0 && !math.IsInf(d.SE[i], 0)) {
			return fmt.Errorf("surrogate: the error of point %d is %g, want 0 or more", i, d.SE[i])
		}
	}
	return nil
}

// MinPoints is the smallest number of points that can be fitted.
const MinPoints = 3

// Model is a fitted Gaussian process. It is read-only and may be shared.
type Model struct {
	low, width []float64
	x          [][]float64 // scaled to the unit box
	y          []float64   // standardised: (Y - shift)/scale
	noise      []float64   // variances, standardised
	shift      float64
	scale      float64

	hyper hyper
	chol  mat.Cholesky
	ones  *mat.VecDense // K^-1 1
	alpha *mat.VecDense // K^-1 (y - mean)
	mean  float64       // generalised least squares
	sum   float64       // 1' K^-1 1
	best  float64       // ln of the posterior density of the hyperparameters
}

// hyper are the parameters of the covariance
// s^2 m(r), r^2 = sum of ((x_k - x'_k)/l_k)^2, m the Matern function of order 5/2, plus the points'
// own variances and one that all share.
type hyper struct {
	amplitude float64   // s
	lengths   []float64 // l_k, in widths of the box
	jitter    float64   // standard deviation that all points share beyond their own error
}

// matern is the Matern correlation of order 5/2 (Rasmussen and Williams (2006), eq. 4.17).
func matern(r float64) float64 {
	a := math.Sqrt(5) * r
	return (1 + a + a*a/3) * math.Exp(-a)
}

func (h *hyper) covariance(a, b []float64) float64 {
	r2 := 0.0
	for k := range a {
		d := (a[k] - b[k]) / h.lengths[k]
		r2 += d * d
	}
	return h.amplitude * h.amplitude * matern(math.Sqrt(r2))
}

// Fit finds the covariance under which the data are most likely (with weak priors, so that few
// points do not give absurd lengths) and returns the process given the data.
func Fit(d Data) (*Model, error) {
	if err := d.check(); err != nil {
		return nil, err
	}
	m := scaled(&d)
	if err := m.maximise(); err != nil {
		return nil, err
	}
	return m, nil
}

// scaled returns an unfitted model of standardised data.
func scaled(d *Data) *Model {
	m := &Model{low: d.Low}
	for k := range d.Low {
		m.width = append(m.width, d.High[k]-d.Low[k])
	}
	n := float64(len(d.Y))
	for _, y := range d.Y {
		m.shift += y / n
	}
	square := 0.0
	for _, y := range d.Y {
		square += (y - m.shift) * (y - m.shift) / n
	}
	if m.scale = math.Sqrt(square); m.scale <= 1e-12*math.Abs(m.shift) {
		m.scale = math.Max(math.Abs(m.shift), 1)
	}
	for i, x := range d.X {
		m.x = append(m.x, m.unit(x))
		m.y = append(m.y, (d.Y[i]-m.shift)/m.scale)
		variance := 0.0
		if d.SE != nil {
			variance = d.SE[i] / m.scale * d.SE[i] / m.scale
		}
		m.noise = append(m.noise, variance)
	}
	return m
}

// unit scales settings to the unit box.
func (m *Model) unit(x []float64) []float64 {
	u := make([]float64, len(x))
	for k := range x {
		u[k] = (x[k] - m.low[k]) / m.width[k]
	}
	return u
}

var errSingular = errors.New("surrogate: the covariance of the points is singular")

// condition fixes the hyperparameters and solves for the weights; returns ln of the likelihood with
// the mean integrated out (Rasmussen and Williams (2006), eqs. 2.30 and 2.45).
func (m *Model) condition(h hyper) (float64, error) {
	n := len(m.x)
	k := mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			k.SetSym(i, j, h.covariance(m.x[i], m.x[j]))
		}
		k.SetSym(i, i, k.At(i, i)+m.noise[i]+h.jitter*h.jitter)
	}
	if !m.chol.Factorize(k) {
		return math.Inf(-1), errSingular
	}
	one := mat.NewVecDense(n, nil)
	for i := range n {
		one.SetVec(i, 1)
	}
	y := mat.NewVecDense(n, append([]float64(nil), m.y...))
	m.ones, m.alpha = mat.NewVecDense(n, nil), mat.NewVecDense(n, nil)
	if err := m.chol.SolveVecTo(m.ones, one); err != nil {
		return math.Inf(-1), errSingular
	}
	m.sum = mat.Dot(one, m.ones)
	m.mean = mat.Dot(y, m.ones) / m.sum
	y.AddScaledVec(y, -m.mean, one)
	if err := m.chol.SolveVecTo(m.alpha, y); err != nil {
		return math.Inf(-1), errSingular
	}
	m.hyper = h
	return -0.5 * (mat.Dot(y, m.alpha) + m.chol.LogDet() + math.Log(m.sum) +
		float64(n-1)*math.Log(2*math.Pi)), nil
}

// Predict returns the expected result at the settings x and its standard error: that of the
// function, without the scatter that a run there would have of its own.
func (m *Model) Predict(x []float64) (mean, se float64) {
	u := m.unit(x)
	n := len(m.x)
	k := mat.NewVecDense(n, nil)
	for i := range n {
		k.SetVec(i, m.hyper.covariance(u, m.x[i]))
	}
	w := mat.NewVecDense(n, nil)
	if err := m.chol.SolveVecTo(w, k); err != nil {
		return math.NaN(), math.NaN()
	}
	mean = m.mean + mat.Dot(k, m.alpha)
	// The mean is estimated, too (Rasmussen and Williams (2006), eq. 2.42).
	rest := 1 - mat.Dot(k, m.ones)
	variance := m.hyper.amplitude*m.hyper.amplitude - mat.Dot(k, w) + rest*rest/m.sum
	return m.shift + m.scale*mean, m.scale * math.Sqrt(math.Max(0, variance))
}

// Lengths returns the distance by input over which results are alike, in units of the input.
func (m *Model) Lengths() []float64 {
	list := make([]float64, len(m.width))
	for k := range list {
		list[k] = m.hyper.lengths[k] * m.width[k]
	}
	return list
}

// Scatter returns the standard deviation of the results beyond their own errors.
func (m *Model) Scatter() float64 { return m.hyper.jitter * m.scale }

// LeaveOneOut predicts each point from the others and returns the differences in their joint
// standard errors: of size 1 if the model's errors are right (Rasmussen and Williams (2006), eq.
// 5.12; the hyperparameters and the mean stay those of all points).
func (m *Model) LeaveOneOut() []float64 {
	n := len(m.x)
	var inverse mat.SymDense
	if err := m.chol.InverseTo(&inverse); err != nil {
		return nil
	}
	list := make([]float64, n)
	for i := range n {
		list[i] = m.alpha.AtVec(i) / math.Sqrt(inverse.At(i, i))
	}
	return list
}
