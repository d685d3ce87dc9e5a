package surrogate

import (
	"math"

	"gonum.org/v1/gonum/optimize"
)

const (
	// priorLength and priorSpread are the median of the prior on a length, in ranges of its input,
	// and the standard deviation of its logarithm: 95 % between a quarter and four ranges. A broader
	// one takes few samples that happen to lie on a plane for a proof that all is plane.
	priorLength, priorSpread = 1.0, 0.7
	// priorAmplitude likewise, in standard deviations of the samples.
	priorAmplitude, amplitudeSpread = 1.5, 1.5
	// evaluations of the likelihood a start.
	evaluations = 400
)

// badness is minus the logarithm of the posterior density of the parameters, as logarithms: the
// lengths, then the amplitude.
func (m *Model) badness(v []float64) float64 {
	d := len(m.low)
	sum := square((v[d] - math.Log(priorAmplitude)) / amplitudeSpread)
	for i := range d {
		sum += square((v[i] - math.Log(priorLength)) / priorSpread)
	}
	for _, x := range v {
		if math.Abs(x) > 12 {
			return math.Inf(1)
		}
	}
	_, l, ok := m.condition(unpack(v))
	if !ok {
		return math.Inf(1)
	}
	return sum/2 - l
}

func unpack(v []float64) params {
	d := len(v) - 1
	p := params{amplitude: math.Exp(v[d]), lengths: make([]float64, d)}
	for i := range d {
		p.lengths[i] = math.Exp(v[i])
	}
	return p
}

func (p params) pack() []float64 {
	var v []float64
	for _, l := range p.lengths {
		v = append(v, math.Log(l))
	}
	return append(v, math.Log(p.amplitude))
}

// mostLikely returns the parameters of the largest posterior density.
func (m *Model) mostLikely() params {
	d := len(m.low)
	best, least := params{}, math.Inf(1)
	for _, length := range []float64{0.25, 1, 4} {
		start := make([]float64, d+1)
		for i := range d {
			start[i] = math.Log(length)
		}
		start[d] = math.Log(math.Max(1, length))
		// Nelder-Mead never fails on its own; a start that gets nowhere is passed over.
		r, _ := optimize.Minimize(optimize.Problem{Func: m.badness}, start,
			&optimize.Settings{
				FuncEvaluations: evaluations, Concurrent: 1,
				Converger: &optimize.FunctionConverge{Absolute: 1e-5, Iterations: 30},
			}, &optimize.NelderMead{})
		if r != nil && r.F < least {
			best, least = unpack(r.X), r.F
		}
	}
	if best.lengths == nil { // no start was regular: condition will say so
		best = unpack(make([]float64, d+1))
	}
	return best
}

func square(x float64) float64 { return x * x }
