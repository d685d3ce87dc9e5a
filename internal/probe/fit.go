package probe

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/mat"
)

// data are the points of a fit.
type data struct {
	voltage, current, sigma []float64 // [V], [A], [A]
}

// fitted is the outcome of a fit.
type fitted struct {
	model *model
	p     []float64
	free  []int
	// chi2 is the sum of squared residuals over their errors, with the priors; points counts the
	// residuals.
	chi2   float64
	points int
}

// prior holds a parameter near a value.
type prior struct {
	par         int
	mean, error float64
}

// priors are weak: how far theory can be trusted.
func priors() []prior {
	return []prior{{parIonSlope, 0, 0.1}, {parSaturation, 1, 0.7}}
}

// pulls are the number of residuals that are priors.
func (m *model) pulls() int {
	if m.kind == Free {
		return len(priors()) + freeCells - 1
	}
	return len(priors())
}

// residuals of the points and of the priors, in their errors.
func (m *model) residuals(p []float64, d *data, out []float64) {
	c := m.characteristic(p)
	for k, v := range d.voltage {
		out[k] = (d.current[k] - c.at(v)) / d.sigma[k]
	}
	for i, r := range priors() {
		out[len(d.voltage)+i] = (r.mean - p[r.par]) / r.error
	}
	if m.kind != Free {
		return
	}
	before := 0.0
	for k := range freeCells - 1 {
		out[len(d.voltage)+len(priors())+k] = (p[parShape+k] - before) / freePriors
		before = p[parShape+k]
	}
}

// limits keeps parameters where they mean something.
func limits(par int) (lo, hi float64) {
	switch par {
	case parTemp:
		return math.Log(0.02), math.Log(100)
	case parIonSlope:
		return -0.6, 0.6
	case parSaturation:
		return 0, 4
	case parRF:
		return 0, 1e4
	case parShape:
		return -3, 5
	case parShape2:
		return -9, 3
	}
	if par > parShape2 {
		return -3, 3
	}
	return math.Inf(-1), math.Inf(1)
}

const (
	maxIterations = 60
	// settled is the decrease of chi2 below which a fit has come to an end.
	settled = 1e-3
)

// fit finds the least sum of squares by the method of K. Levenberg, Q. Appl. Math. 2, 164 (1944)
// and D. W. Marquardt, SIAM J. Appl. Math. 11, 431 (1963).
func (m *model) fit(start []float64, free []int, d *data) (*fitted, error) {
	p := append([]float64(nil), start...)
	n := len(d.voltage) + m.pulls()
	r, trial := make([]float64, n), make([]float64, n)
	m.residuals(p, d, r)
	f := &fitted{model: m, free: free, points: len(d.voltage), chi2: squares(r)}
	jacobian := mat.NewDense(n, len(free), nil)
	lambda := 1e-3
	for range maxIterations {
		m.jacobian(p, free, d, r, jacobian)
		improved := false
		before := f.chi2
		for lambda < 1e8 {
			q, ok := step(p, free, r, jacobian, lambda)
			if ok {
				m.residuals(q, d, trial)
				if s := squares(trial); s < f.chi2 {
					p, f.chi2, improved = q, s, true
					copy(r, trial)
					lambda = math.Max(lambda/10, 1e-9)
					break
				}
			}
			lambda *= 8
		}
		if !improved || before-f.chi2 < settled*math.Max(1, 1e-3*f.chi2) {
			break
		}
	}
	f.p = p
	if math.IsNaN(f.chi2) || math.IsInf(f.chi2, 0) {
		return nil, errors.New("probe: the fit did not converge")
	}
	return f, nil
}

// jacobian of the residuals, by differences.
func (m *model) jacobian(p []float64, free []int, d *data, r []float64, out *mat.Dense) {
	q := append([]float64(nil), p...)
	moved := make([]float64, len(r))
	for j, par := range free {
		h := 1e-5 * math.Max(1, math.Abs(p[par]))
		if par == parRF {
			h = 1e-3
		}
		if _, hi := limits(par); p[par]+h > hi {
			h = -h
		}
		q[par] = p[par] + h
		m.residuals(q, d, moved)
		q[par] = p[par]
		for i := range moved {
			out.Set(i, j, (moved[i]-r[i])/h)
		}
	}
}

// step solves the damped normal equations.
func step(p []float64, free []int, r []float64, jacobian *mat.Dense, lambda float64) (
	[]float64, bool,
) {
	k := len(free)
	var normal mat.Dense
	normal.Mul(jacobian.T(), jacobian)
	var gradient mat.VecDense
	gradient.MulVec(jacobian.T(), mat.NewVecDense(len(r), r))
	damped := mat.NewSymDense(k, nil)
	for i := range k {
		for j := i; j < k; j++ {
			damped.SetSym(i, j, normal.At(i, j))
		}
		damped.SetSym(i, i, normal.At(i, i)*(1+lambda)+1e-12)
	}
	var cholesky mat.Cholesky
	if !cholesky.Factorize(damped) {
		return nil, false
	}
	var change mat.VecDense
	if err := cholesky.SolveVecTo(&change, &gradient); err != nil {
		return nil, false // a condition so bad that the step means nothing
	}
	q := append([]float64(nil), p...)
	for i, par := range free {
		lo, hi := limits(par)
		// No step may throw a parameter out of all reason.
		delta := math.Min(math.Max(-change.AtVec(i), -2), 2)
		if par == parRF {
			delta = -change.AtVec(i)
		}
		q[par] = math.Min(math.Max(q[par]+delta, lo), hi)
	}
	return q, true
}

func squares(r []float64) float64 {
	sum := 0.0
	for _, x := range r {
		sum += x * x
	}
	return sum
}
