package probe

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/mat"
)

// SavitzkyGolay is a filter that fits a polynomial to a window of equally spaced points.
//
// Ref: A. Savitzky and M. J. E. Golay, Anal. Chem. 36, 1627 (1964).
type SavitzkyGolay struct {
	half    int
	weights [3][][]float64 // by derivative and by place of the point in the window
}

// NewSavitzkyGolay makes the filter of 2 half + 1 points and the order of the polynomial.
func NewSavitzkyGolay(half, order int) (*SavitzkyGolay, error) {
	n := 2*half + 1
	if order < 2 || n <= order {
		return nil, errors.New("probe: a window of fewer points than the polynomial has coefficients")
	}
	f := &SavitzkyGolay{half: half}
	basis := mat.NewDense(n, order+1, nil)
	for i := range n {
		x := float64(i-half) / float64(half)
		power := 1.0
		for j := range order + 1 {
			basis.Set(i, j, power)
			power *= x
		}
	}
	var qr mat.QR
	qr.Factorize(basis)
	identity := mat.NewDense(n, n, nil)
	for i := range n {
		identity.Set(i, i, 1)
	}
	var solved mat.Dense
	if err := qr.SolveTo(&solved, false, identity); err != nil {
		return nil, err
	}
	for derivative := range 3 {
		scale := math.Pow(float64(half), -float64(derivative))
		for place := range n {
			f.weights[derivative] = append(f.weights[derivative],
				weightsAt(&solved, derivative, order, float64(place-half)/float64(half), scale))
		}
	}
	return f, nil
}

// weightsAt are the weights of the points in the derivative of the polynomial at x.
func weightsAt(solved *mat.Dense, derivative, order int, x, scale float64) []float64 {
	_, n := solved.Dims()
	w := make([]float64, n)
	for j := derivative; j <= order; j++ {
		factor := scale * math.Pow(x, float64(j-derivative))
		for k := range derivative {
			factor *= float64(j - k)
		}
		for i := range w {
			w[i] += factor * solved.At(j, i)
		}
	}
	return w
}

// Apply returns a derivative (0, 1 or 2) of equally spaced values; near the ends the polynomial of
// the last whole window serves.
func (f *SavitzkyGolay) Apply(values []float64, derivative int, spacing float64) []float64 {
	n := 2*f.half + 1
	out := make([]float64, len(values))
	if len(values) < n {
		for i := range out {
			out[i] = math.NaN()
		}
		return out
	}
	unit := math.Pow(spacing, -float64(derivative))
	for i := range values {
		first := min(max(i-f.half, 0), len(values)-n)
		sum := 0.0
		for k, w := range f.weights[derivative][i-first] {
			sum += w * values[first+k]
		}
		out[i] = sum * unit
	}
	return out
}

// Gain is the root of the sum of squared weights of a derivative in mid-window: the noise of the
// result over the noise of a point, in units of 1/spacing^derivative.
func (f *SavitzkyGolay) Gain(derivative int) float64 {
	return math.Sqrt(squares(f.weights[derivative][f.half]))
}
