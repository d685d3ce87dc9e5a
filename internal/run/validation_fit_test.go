package run

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// fitted is a linear model fitted to values with errors.
type fitted struct {
	c      []float64  // coefficients
	cov    *mat.Dense // their covariance
	chi2   float64    // sum of squared deviations in errors
	points int
}

// fit finds c for y = sum over k of c_k x_k by weighted least squares; errors are standard errors.
func fit(t *testing.T, x [][]float64, y, errors []float64) fitted {
	t.Helper()
	n, m := len(x), len(x[0])
	a, b := mat.NewDense(n, m, nil), mat.NewVecDense(n, nil)
	for i := range x {
		for k := range m {
			a.Set(i, k, x[i][k]/errors[i])
		}
		b.SetVec(i, y[i]/errors[i])
	}
	var c, rest mat.VecDense
	var normal, cov mat.Dense
	if err := c.SolveVec(a, b); err != nil {
		t.Fatal(err)
	}
	normal.Mul(a.T(), a)
	if err := cov.Inverse(&normal); err != nil {
		t.Fatal(err)
	}
	rest.MulVec(a, &c)
	rest.SubVec(b, &rest)
	return fitted{c.RawVector().Data, &cov, mat.Dot(&rest, &rest), n}
}

// at returns the model's value for x and its standard error.
func (f fitted) at(x ...float64) (value, stdErr float64) {
	variance := 0.0
	for i := range x {
		value += f.c[i] * x[i]
		for k := range x {
			variance += x[i] * x[k] * f.cov.At(i, k)
		}
	}
	return value, math.Sqrt(variance)
}

// Goal: the fit finds the coefficients, its errors are their spread, and chi2 is about the
// degrees of freedom. Method: 4000 fits to a known plane with known noise. A spread of 4000 is
// known to 1.1 %, so 6 % is five of its errors (false alarms 1e-6).
func TestFit(t *testing.T) {
	const tries = 4000
	truth := []float64{3, -0.7, 0.2}
	x := [][]float64{{1, 1, 1}, {1, 2, 1}, {1, 0.5, 1}, {1, 1, 2}, {1, 1, 0.5}, {1, 0.3, 0.3}}
	errors := []float64{0.01, 0.02, 0.01, 0.03, 0.01, 0.02}
	r := rand.New(rand.NewPCG(1, 2))
	var off, square [3]float64
	var quoted [3]float64
	chi2 := 0.0
	for range tries {
		y := make([]float64, len(x))
		for i := range x {
			for k, c := range truth {
				y[i] += c * x[i][k]
			}
			y[i] += errors[i] * r.NormFloat64()
		}
		f := fit(t, x, y, errors)
		for k := range truth {
			one := make([]float64, len(truth))
			one[k] = 1
			v, se := f.at(one...)
			off[k] += (v - truth[k]) / tries
			square[k] += (v - truth[k]) * (v - truth[k]) / tries
			quoted[k] = se
		}
		chi2 += f.chi2 / tries
	}
	for k := range truth {
		if math.Abs(off[k]) > 5*quoted[k]/math.Sqrt(tries) {
			t.Errorf("coefficient %d is off by %g, quoted error %g", k, off[k], quoted[k])
		}
		if ratio := math.Sqrt(square[k]) / quoted[k]; math.Abs(ratio-1) > 0.06 {
			t.Errorf("coefficient %d: spread over quoted error %g, want 1", k, ratio)
		}
	}
	// Variance of chi2 is twice the degrees of freedom.
	if dof := 3.0; math.Abs(chi2-dof) > 5*math.Sqrt(2*dof/tries) {
		t.Errorf("mean chi2 %g, want %g", chi2, dof)
	}
}
