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

// At predicts the quantity at a place. Far from all samples it is the constant with the whole
// amplitude as error.
func (m *Model) At(x []float64) Prediction {
	u := m.scaled(x)
	n := len(m.x)
	k := mat.NewVecDense(n, nil)
	for i := range n {
		k.SetVec(i, m.params.kernel(u, m.x[i]))
	}
	solved := mat.NewVecDense(n, nil)
	_ = m.chol.SolveVecTo(solved, k) // as in condition
	unknown := 1 - mat.Dot(k, m.ones)
	variance := square(m.params.amplitude) - mat.Dot(k, solved) + unknown*unknown*m.constantVar
	return Prediction{
		Mean:   m.shift + m.scale*(m.constant+mat.Dot(k, m.weights)),
		StdErr: m.scale * math.Sqrt(math.Max(0, variance)),
	}
}

// Lengths returns the distance in each input over which the quantity changes, in its unit.
func (m *Model) Lengths() []float64 {
	l := make([]float64, len(m.span))
	for i := range l {
		l[i] = m.params.lengths[i] * m.span[i]
	}
	return l
}

// Residuals returns, for each sample, the difference to what the others predict for it, in its
// standard errors (of both). Much beyond 3 the model does not describe the samples.
//
// Ref: Rasmussen and Williams (2006), eq. (5.12).
func (m *Model) Residuals() []float64 {
	n := len(m.x)
	var inverse mat.SymDense
	_ = m.chol.InverseTo(&inverse) // as in condition
	z := make([]float64, n)
	for i := range z {
		// The constant is estimated from all samples: what it takes from the precision of one.
		precision := inverse.At(i, i) - square(m.ones.AtVec(i))*m.constantVar
		z[i] = m.weights.AtVec(i) / math.Sqrt(math.Max(precision, math.SmallestNonzeroFloat64))
	}
	return z
}

// Joint predicts the quantity at several places at once: the means, and the covariances of what is
// not known of them, row by row.
func (m *Model) Joint(places [][]float64) (mean []float64, covariance *mat.SymDense) {
	n, count := len(m.x), len(places)
	k := mat.NewDense(n, count, nil)
	scaled := make([][]float64, count)
	mean = make([]float64, count)
	unknown := make([]float64, count)
	for j, x := range places {
		scaled[j] = m.scaled(x)
		column := mat.NewVecDense(n, nil)
		for i := range n {
			v := m.params.kernel(scaled[j], m.x[i])
			column.SetVec(i, v)
			k.Set(i, j, v)
		}
		mean[j] = m.shift + m.scale*(m.constant+mat.Dot(column, m.weights))
		unknown[j] = 1 - mat.Dot(column, m.ones)
	}
	var solved mat.Dense
	_ = m.chol.SolveTo(&solved, k) // as in condition
	var known mat.Dense
	known.Mul(k.T(), &solved)
	covariance = mat.NewSymDense(count, nil)
	for i := range count {
		for j := range i + 1 {
			c := m.params.kernel(scaled[i], scaled[j]) - known.At(i, j) +
				unknown[i]*unknown[j]*m.constantVar
			covariance.SetSym(i, j, m.scale*m.scale*c)
		}
	}
	return mean, covariance
}
