package surrogate

import (
	"math"

	"gonum.org/v1/gonum/optimize"
)

// Priors of the hyperparameters, normal in their logarithms: lengths of about half the box within a
// factor of 3, results that differ by about their spread within a factor of 3, and scatter beyond
// their errors of about a hundredth of it within a factor of 5.
const (
	lengthPrior, lengthWidth       = 0.5, 1.1
	amplitudePrior, amplitudeWidth = 1.0, 1.1
	jitterPrior, jitterWidth       = 0.01, 1.6
)

// bound keeps logarithms where numbers are harmless.
const bound = 7

func unpack(p []float64) hyper {
	at := func(i int) float64 { return math.Exp(math.Max(-bound, math.Min(bound, p[i]))) }
	h := hyper{amplitude: at(0), jitter: at(1)}
	for k := 2; k < len(p); k++ {
		h.lengths = append(h.lengths, at(k))
	}
	return h
}

// prior returns ln of the density of the parameters, without its constant.
func prior(p []float64) float64 {
	term := func(i int, middle, width float64) float64 {
		z := (p[i] - math.Log(middle)) / width
		return -0.5 * z * z
	}
	sum := term(0, amplitudePrior, amplitudeWidth) + term(1, jitterPrior, jitterWidth)
	for k := 2; k < len(p); k++ {
		sum += term(k, lengthPrior, lengthWidth)
	}
	return sum
}

// maximise finds the most likely hyperparameters from a few starts.
func (m *Model) maximise() error {
	goal := func(p []float64) float64 {
		l, err := m.condition(unpack(p))
		if err != nil {
			return math.Inf(1)
		}
		return -l - prior(p)
	}
	var best []float64
	m.best = math.Inf(-1)
	for _, length := range []float64{0.15, 0.5, 1.5} {
		start := []float64{math.Log(amplitudePrior), math.Log(jitterPrior)}
		for range m.width {
			start = append(start, math.Log(length))
		}
		r, err := optimize.Minimize(optimize.Problem{Func: goal}, start,
			&optimize.Settings{FuncEvaluations: 300 + 200*len(start), Concurrent: 0},
			&optimize.NelderMead{})
		if r == nil || err != nil && math.IsInf(r.F, 0) {
			continue
		}
		if -r.F > m.best {
			m.best, best = -r.F, append([]float64(nil), r.X...)
		}
	}
	if best == nil {
		return errSingular
	}
	_, err := m.condition(unpack(best))
	return err
}
