package surrogate

import (
	"math"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"
)

// Prediction is what is expected of the quantity at a place.
type Prediction struct {
	Mean   float64
	StdErr float64
}

// Above returns the probability that the quantity is larger than bound.
func (p Prediction) Above(bound float64) float64 {
	if p.StdErr == 0 {
		switch {
		case p.Mean > bound:
			return 1
		case p.Mean < bound:
			return 0
		}
		return 0.5
	}
	return distuv.UnitNormal.CDF((p.Mean - bound) / p.StdErr)
}

// At predicts the quantity at a place: the mean over the draws of the parameters, and the root of
// the sum of the mean variance and the variance of the means. Far from all samples it is the
// constant with the whole amplitude as error.
func (m *Model) At(x []float64) Prediction {
	u := m.scaled(x)
	means, sum, variance := make([]float64, len(m.draws)), 0.0, 0.0
	for i, c := range m.draws {
		mean, v := m.predict(c, u)
		means[i] = mean
		sum += mean
		variance += v
	}
	n := float64(len(m.draws))
	mean := sum / n
	variance /= n
	for _, one := range means {
		variance += square(one-mean) / n
	}
	return Prediction{Mean: m.shift + m.scale*mean, StdErr: m.scale * math.Sqrt(variance)}
}

// predict returns mean and variance at a scaled place, of the scaled values.
func (m *Model) predict(c *process, u []float64) (mean, variance float64) {
	n := len(m.x)
	k := mat.NewVecDense(n, nil)
	for i := range n {
		k.SetVec(i, c.params.kernel(u, m.x[i]))
	}
	solved := mat.NewVecDense(n, nil)
	_ = c.chol.SolveVecTo(solved, k) // as in condition
	unknown := 1 - mat.Dot(k, c.ones)
	variance = square(c.params.amplitude) - mat.Dot(k, solved) + unknown*unknown*c.constantVar
	return c.constant + mat.Dot(k, c.weights), math.Max(0, variance)
}

// Lengths returns the distance in each input over which the quantity changes, in its unit.
func (m *Model) Lengths() []float64 {
	l := make([]float64, len(m.span))
	for i := range l {
		l[i] = m.likely.params.lengths[i] * m.span[i]
	}
	return l
}

// Residuals returns, for each sample, the difference to what the others predict for it with the
// most likely parameters, in its standard errors (of both). Much beyond 3 the model does not
// describe the samples.
//
// Ref: Rasmussen and Williams (2006), eq. (5.12).
func (m *Model) Residuals() []float64 {
	n := len(m.x)
	c := m.likely
	var inverse mat.SymDense
	_ = c.chol.InverseTo(&inverse) // as in condition
	z := make([]float64, n)
	for i := range z {
		// The constant is estimated from all samples: what it takes from the precision of one.
		precision := inverse.At(i, i) - square(c.ones.AtVec(i))*c.constantVar
		z[i] = c.weights.AtVec(i) / math.Sqrt(math.Max(precision, math.SmallestNonzeroFloat64))
	}
	return z
}

// Joint predicts the quantity at several places at once, with the most likely parameters: the
// means, and the covariances of what is not known of them, row by row. It is for choosing where to
// look next; errors to be told are those of At.
func (m *Model) Joint(places [][]float64) (mean []float64, covariance *mat.SymDense) {
	n, count := len(m.x), len(places)
	c := m.likely
	k := mat.NewDense(n, count, nil)
	scaled := make([][]float64, count)
	mean = make([]float64, count)
	unknown := make([]float64, count)
	for j, x := range places {
		scaled[j] = m.scaled(x)
		column := mat.NewVecDense(n, nil)
		for i := range n {
			v := c.params.kernel(scaled[j], m.x[i])
			column.SetVec(i, v)
			k.Set(i, j, v)
		}
		mean[j] = m.shift + m.scale*(c.constant+mat.Dot(column, c.weights))
		unknown[j] = 1 - mat.Dot(column, c.ones)
	}
	var solved mat.Dense
	_ = c.chol.SolveTo(&solved, k) // as in condition
	var known mat.Dense
	known.Mul(k.T(), &solved)
	covariance = mat.NewSymDense(count, nil)
	for i := range count {
		for j := range i + 1 {
			v := c.params.kernel(scaled[i], scaled[j]) - known.At(i, j) +
				unknown[i]*unknown[j]*c.constantVar
			covariance.SetSym(i, j, m.scale*m.scale*v)
		}
	}
	return mean, covariance
}
