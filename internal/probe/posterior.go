package probe

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"

	"ionfall/internal/rng"
	"ionfall/internal/surrogate"
)

// Datum is a measured quantity that inputs are adjusted to.
type Datum struct {
	Key, Label string
	Quantity
}

// Point is a run of the design: places of its inputs in 0..1, the simulated quantities in the order
// of the data, and those that are predicted.
type Point struct {
	Place     []float64
	Simulated []Quantity
	Predicted []Quantity
}

// Problem is what the data say about inputs.
type Problem struct {
	Inputs []Input
	Data   []Datum
	// Covariance of the data, measured [products of their units].
	Covariance [][]float64
	// ModelError is the relative standard error of what the simulation leaves out.
	ModelError float64
	// PredictedKeys of the quantities that are predicted, with labels and units.
	Predicted []Named
	Points    []Point
	Seed      uint64
}

// Posterior is a weighted sample of the inputs.
type Posterior struct {
	Problem *Problem
	// Draws are values of the inputs, then of the predictions, with equal weights.
	Draws [][]float64
	// Prior are the same drawn from the prior.
	Prior [][]float64
	// Effective is the number of independent draws that the sample is worth.
	Effective float64
	// Best chi-square of the data anywhere in the priors, and the chance of a larger one.
	BestChi2, Chance float64
	// BestPlace is where it is.
	BestPlace []float64
}

const (
	posteriorSamples = 4000
	posteriorRounds  = 3
	posteriorDraws   = 2000
)

// surrogates predict data and predictions between the runs.
type surrogates struct {
	data, predicted []*surrogate.Model
}

func (p *Problem) surrogates() (*surrogates, error) {
	fitOf := func(of func(q *Point) Quantity) (*surrogate.Model, error) {
		var samples []surrogate.Sample
		for i := range p.Points {
			q := of(&p.Points[i])
			if !q.Known() {
				return nil, errors.New("a run does not give a quantity that was measured")
			}
			samples = append(samples, surrogate.Sample{X: p.Points[i].Place, Value: q.Value, StdErr: q.SE})
		}
		return surrogate.Fit(samples)
	}
	s := &surrogates{}
	for k := range p.Data {
		m, err := fitOf(func(q *Point) Quantity { return q.Simulated[k] })
		if err != nil {
			return nil, err
		}
		s.data = append(s.data, m)
	}
	for k := range p.Predicted {
		m, err := fitOf(func(q *Point) Quantity { return q.Predicted[k] })
		if err != nil {
			return nil, err
		}
		s.predicted = append(s.predicted, m)
	}
	return s, nil
}

// misfit is chi-square of the data at a place, and the logarithm of the likelihood.
func (p *Problem) misfit(s *surrogates, place []float64) (chi2, logLikelihood float64) {
	n := len(p.Data)
	covariance := mat.NewSymDense(n, nil)
	rest := mat.NewVecDense(n, nil)
	// In units of the errors: densities and volts differ by more powers of ten than a double has.
	scale := make([]float64, n)
	var variances float64
	for i := range n {
		q := s.data[i].At(place)
		model := p.ModelError * p.Data[i].Value
		extra := q.StdErr*q.StdErr + model*model
		scale[i] = math.Sqrt(p.Covariance[i][i] + extra)
		variances += 2 * math.Log(scale[i])
		rest.SetVec(i, (q.Mean-p.Data[i].Value)/scale[i])
		for j := range i {
			covariance.SetSym(i, j, p.Covariance[i][j]/(scale[i]*scale[j]))
		}
		covariance.SetSym(i, i, 1)
	}
	var c mat.Cholesky
	if !c.Factorize(covariance) {
		return math.Inf(1), math.Inf(-1)
	}
	var solved mat.VecDense
	if err := c.SolveVecTo(&solved, rest); err != nil {
		return math.Inf(1), math.Inf(-1)
	}
	chi2 = mat.Dot(rest, &solved)
	return chi2, -(chi2 + c.LogDet() + variances) / 2
}

// Solve samples the posterior by importance sampling: the first round covers the priors, later ones
// a normal distribution, twice as wide, around what the round before found.
func (p *Problem) Solve() (*Posterior, error) {
	s, err := p.surrogates()
	if err != nil {
		return nil, err
	}
	out := &Posterior{Problem: p, BestChi2: math.Inf(1)}
	stream := rng.Key{Seed: p.Seed, Purpose: rng.Resampling, Chunk: 11}.Stream()
	var cover *cover
	var best *weighted
	for range posteriorRounds {
		w := p.round(s, cover, &stream, out)
		if best == nil || w.effective() > best.effective() {
			best = w
		}
		cover = best.cover()
	}
	if math.IsInf(out.BestChi2, 1) {
		return nil, errors.New("the errors of the data contradict each other: their covariance has no " +
			"inverse")
	}
	out.Effective = best.effective()
	freedom := float64(max(1, len(p.Data)-len(p.Inputs)))
	out.Chance = distuv.ChiSquared{K: freedom}.Survival(out.BestChi2)
	for range posteriorDraws {
		out.Draws = append(out.Draws, p.complete(s, best.draw(&stream), &stream))
	}
	prior := p.priorSample(&stream)
	for range posteriorDraws {
		out.Prior = append(out.Prior, p.complete(s, prior.draw(&stream), &stream))
	}
	return out, nil
}

// complete adds predictions, with the error of the surrogate, to a place, whose values it gives.
func (p *Problem) complete(s *surrogates, place []float64, stream *rng.Stream) []float64 {
	var row []float64
	for i := range p.Inputs {
		row = append(row, p.Inputs[i].value(place[i]))
	}
	for _, m := range s.predicted {
		q := m.At(place)
		row = append(row, q.Mean+q.StdErr*stream.Normal())
	}
	return row
}

// logPrior of a place.
func (p *Problem) logPrior(place []float64) float64 {
	sum := 0.0
	for i := range p.Inputs {
		sum += p.Inputs[i].logPrior(p.Inputs[i].value(place[i]))
	}
	return sum
}

// priorSample are places drawn from the priors.
func (p *Problem) priorSample(stream *rng.Stream) *weighted {
	w := &weighted{}
	for range posteriorSamples {
		place := uniformPlace(len(p.Inputs), stream)
		w.add(place, p.logPrior(place))
	}
	w.normalise()
	return w
}

// round makes weighted places; out keeps the best fit.
func (p *Problem) round(s *surrogates, c *cover, stream *rng.Stream, out *Posterior) *weighted {
	w := &weighted{}
	for range posteriorSamples {
		var place []float64
		logProposal := 0.0
		if c == nil {
			place = uniformPlace(len(p.Inputs), stream)
		} else {
			place, logProposal = c.draw(stream)
		}
		if !inside(place) {
			continue
		}
		chi2, logL := p.misfit(s, place)
		if chi2 < out.BestChi2 {
			out.BestChi2, out.BestPlace = chi2, place
		}
		w.add(place, logL+p.logPrior(place)-logProposal)
	}
	w.normalise()
	return w
}

func uniformPlace(n int, stream *rng.Stream) []float64 {
	place := make([]float64, n)
	for i := range place {
		place[i] = stream.Float64()
	}
	return place
}

func inside(place []float64) bool {
	for _, u := range place {
		if u < 0 || u > 1 {
			return false
		}
	}
	return true
}

// Values of the inputs at a place.
func (p *Problem) Values(place []float64) []float64 {
	out := make([]float64, len(place))
	for i := range place {
		out[i] = p.Inputs[i].value(place[i])
	}
	return out
}

// Places are n places spread over the posterior: where more runs help.
func (p *Posterior) Places(n int) [][]float64 {
	out := make([][]float64, 0, n)
	for i := range n {
		row := p.Draws[(i*len(p.Draws))/n]
		place := make([]float64, len(p.Problem.Inputs))
		for k := range place {
			f := &p.Problem.Inputs[k]
			place[k] = (row[k] - f.Lo) / (f.Hi - f.Lo)
		}
		out = append(out, place)
	}
	return out
}
