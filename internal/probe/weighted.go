package probe

import (
	"math"
	"sort"

	"gonum.org/v1/gonum/mat"

	"ionfall/internal/rng"
)

// weighted is a sample of places with weights.
type weighted struct {
	places  [][]float64
	weights []float64 // logarithms until normalise
	sums    []float64 // running sums, the last is 1
}

func (w *weighted) add(place []float64, logWeight float64) {
	w.places, w.weights = append(w.places, place), append(w.weights, logWeight)
}

func (w *weighted) normalise() {
	top := math.Inf(-1)
	for _, x := range w.weights {
		top = math.Max(top, x)
	}
	sum := 0.0
	for i, x := range w.weights {
		w.weights[i] = math.Exp(x - top)
		sum += w.weights[i]
	}
	w.sums = make([]float64, len(w.weights))
	before := 0.0
	for i := range w.weights {
		w.weights[i] /= sum
		before += w.weights[i]
		w.sums[i] = before
	}
}

// effective number of draws: one over the sum of squared weights.
func (w *weighted) effective() float64 { return 1 / squares(w.weights) }

// draw a place by the weights.
func (w *weighted) draw(stream *rng.Stream) []float64 {
	i := sort.SearchFloat64s(w.sums, stream.Float64()*w.sums[len(w.sums)-1])
	return w.places[min(i, len(w.places)-1)]
}

// cover is a normal distribution that places are proposed from.
type cover struct {
	mean  []float64
	lower *mat.TriDense // of the Cholesky decomposition of the covariance
}

const (
	// coverFactor widens the covariance, so that the tails are drawn from.
	coverFactor = 2.5
	// coverLeast is the least standard deviation of a proposal, a part of the prior.
	coverLeast = 2e-3
)

// cover fits the proposal to the sample.
func (w *weighted) cover() *cover {
	n := len(w.places[0])
	c := &cover{mean: make([]float64, n)}
	for k, place := range w.places {
		for i := range n {
			c.mean[i] += w.weights[k] * place[i]
		}
	}
	covariance := mat.NewSymDense(n, nil)
	for k, place := range w.places {
		for i := range n {
			for j := i; j < n; j++ {
				covariance.SetSym(i, j, covariance.At(i, j)+
					coverFactor*w.weights[k]*(place[i]-c.mean[i])*(place[j]-c.mean[j]))
			}
		}
	}
	for i := range n {
		covariance.SetSym(i, i, covariance.At(i, i)+coverLeast*coverLeast)
	}
	var cholesky mat.Cholesky
	if !cholesky.Factorize(covariance) {
		return nil // the priors again
	}
	c.lower = mat.NewTriDense(n, mat.Lower, nil)
	cholesky.LTo(c.lower)
	return c
}

// draw a place; the logarithm of the density is up to a constant.
func (c *cover) draw(stream *rng.Stream) (place []float64, logDensity float64) {
	n := len(c.mean)
	z := make([]float64, n)
	for i := range z {
		z[i] = stream.Normal()
		logDensity -= z[i] * z[i] / 2
	}
	place = make([]float64, n)
	for i := range n {
		place[i] = c.mean[i]
		for j := range i + 1 {
			place[i] += c.lower.At(i, j) * z[j]
		}
	}
	return place, logDensity
}

// Moments are mean and standard deviation of a column of draws.
func Moments(draws [][]float64, column int) (mean, sd float64) {
	n := float64(len(draws))
	for _, d := range draws {
		mean += d[column] / n
	}
	for _, d := range draws {
		sd += (d[column] - mean) * (d[column] - mean) / (n - 1)
	}
	return mean, math.Sqrt(sd)
}

// Correlation of two columns of draws.
func Correlation(draws [][]float64, a, b int) float64 {
	ma, sa := Moments(draws, a)
	mb, sb := Moments(draws, b)
	sum := 0.0
	for _, d := range draws {
		sum += (d[a] - ma) * (d[b] - mb) / float64(len(draws)-1)
	}
	return sum / (sa * sb)
}

// Quantile of a column of draws.
func Quantile(draws [][]float64, column int, part float64) float64 {
	list := make([]float64, len(draws))
	for i, d := range draws {
		list[i] = d[column]
	}
	sort.Float64s(list)
	return list[min(int(part*float64(len(list))), len(list)-1)]
}

// HaltonPlace is a point of the sequence of J. H. Halton, Numer. Math. 2, 84 (1960), from 1 on.
func HaltonPlace(i, dimensions int) []float64 {
	primes := [MaxInputs]int{2, 3, 5, 7, 11, 13}
	place := make([]float64, dimensions)
	for d := range place {
		f, base := 1.0, primes[d]
		for n := i; n > 0; n /= base {
			f /= float64(base)
			place[d] += f * float64(n%base)
		}
	}
	return place
}
