package scan

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distmv"
	"gonum.org/v1/gonum/stat/distuv"
	"gonum.org/v1/gonum/stat/samplemv"

	"ionfall/internal/surrogate"
)

// observation is a point whose results are known: a value with its error for each quantity.
type observation struct {
	u          []float64 // place in the unit cube of the axes
	value, err []float64
}

// search finds where in the unit cube all wants are met. It knows nothing of runs: quantities are
// surrogates of what was observed.
type search struct {
	wants  []Want // one a quantity; of those after them only the surrogate is kept
	extra  int    // quantities without a want
	models []*fitted
	places [][]float64 // at which observations may be made, and settings recommended
	judges [][]float64 // others, at which the window is judged
}

// fitted is the surrogate of a quantity, of its logarithm where that is smoother.
type fitted struct {
	model *surrogate.Model
	log   bool
	noise float64 // median variance of the observations, in the scale of the model
}

const (
	// mostPlaces at which observations may be made: their covariance matrix is the work of a step.
	mostPlaces = 625
	// mostJudges is enough to tell a part of 0.1 %.
	mostJudges = 1024
	// placeSeed makes the places the same at every search.
	placeSeed = 1
)

// newSearch lays out its places: grids in one and two dimensions, Halton's sequence in more. The
// window is judged at other places than those of the observations, which lie where the boundary is
// doubtful and take the doubt away just there.
func newSearch(wants []Want, dimensions int) *search {
	s := &search{wants: wants}
	switch dimensions {
	case 1:
		s.places, s.judges = gridPlaces(1, 201), middles(1, 400)
	case 2:
		s.places, s.judges = gridPlaces(2, 25), middles(2, 32)
	default:
		all := haltonPlaces(dimensions, mostPlaces+mostJudges)
		s.places, s.judges = all[:mostPlaces], all[mostPlaces:]
	}
	return s
}

func haltonPlaces(dimensions, count int) [][]float64 {
	batch := mat.NewDense(count, dimensions, nil)
	source := rand.NewPCG(placeSeed, 0)
	samplemv.Halton{
		Kind: samplemv.Owen, Q: distmv.NewUnitUniform(dimensions, source), Src: source,
	}.Sample(batch)
	places := make([][]float64, count)
	for i := range places {
		places[i] = mat.Row(nil, i, batch)
	}
	return places
}

// middles are those of the cells of a grid.
func middles(dimensions, side int) [][]float64 {
	places := gridPlaces(dimensions, side)
	for _, u := range places {
		for k := range u {
			u[k] = (u[k]*float64(side-1) + 0.5) / float64(side)
		}
	}
	return places
}

func gridPlaces(dimensions, side int) [][]float64 {
	count := int(math.Pow(float64(side), float64(dimensions)))
	places := make([][]float64, count)
	for i := range places {
		rest := i
		for range dimensions {
			places[i] = append(places[i], float64(rest%side)/float64(side-1))
			rest /= side
		}
	}
	return places
}

// fit renews the surrogates from the observations.
func (s *search) fit(known []observation) error {
	s.models = nil
	for k := range len(s.wants) + s.extra {
		f, err := fitQuantity(known, k)
		if err != nil {
			return err
		}
		s.models = append(s.models, f)
	}
	return nil
}

// fitQuantity takes logarithms where all values are positive and span more than a factor of 3:
// fluxes and densities act by ratios.
func fitQuantity(known []observation, k int) (*fitted, error) {
	low, high := math.Inf(1), math.Inf(-1)
	for _, o := range known {
		low, high = math.Min(low, o.value[k]), math.Max(high, o.value[k])
	}
	f := &fitted{log: low > 0 && high > 3*low}
	var samples []surrogate.Sample
	var variances []float64
	for _, o := range known {
		sample := surrogate.Sample{X: o.u, Value: o.value[k], StdErr: o.err[k]}
		if math.IsNaN(sample.StdErr) {
			return nil, errors.New("a result has no error: run the points to a better accuracy")
		}
		if f.log {
			sample.Value, sample.StdErr = math.Log(o.value[k]), o.err[k]/o.value[k]
		}
		samples = append(samples, sample)
		variances = append(variances, sample.StdErr*sample.StdErr)
	}
	f.noise = median(variances)
	var err error
	f.model, err = surrogate.Fit(samples)
	return f, err
}

// at predicts a quantity in its own scale.
func (f *fitted) at(u []float64) surrogate.Prediction {
	p := f.model.At(u)
	if f.log {
		mean := math.Exp(p.Mean)
		return surrogate.Prediction{Mean: mean, StdErr: mean * p.StdErr}
	}
	return p
}

// meets returns the probability that a want is met, from a prediction in the scale of the model.
func (f *fitted) meets(w Want, mean, stdErr float64) float64 {
	p := surrogate.Prediction{Mean: mean, StdErr: stdErr}
	above := p.Above(f.bound(w))
	if w.Above {
		return above
	}
	return 1 - above
}

// bound is that of a want in the scale of the model.
func (f *fitted) bound(w Want) float64 {
	if !f.log {
		return w.Bound
	}
	if w.Bound <= 0 {
		return math.Inf(-1)
	}
	return math.Log(w.Bound)
}

// probability returns that of all wants being met at a place, taking the quantities as
// independent.
func (s *search) probability(u []float64) float64 {
	all := 1.0
	for k, w := range s.wants {
		p := s.models[k].model.At(u)
		all *= s.models[k].meets(w, p.Mean, p.StdErr)
	}
	return all
}

// doubt is the part of the plan that is expected to be on the wrong side of the boundary as it is
// known now: the mean of the smaller of the probabilities of in and out.
func (s *search) doubt() float64 {
	sum := 0.0
	for _, u := range s.judges {
		p := s.probability(u)
		sum += math.Min(p, 1-p)
	}
	return sum / float64(len(s.judges))
}

// next returns the places, count of them, at which observations decide most about the boundary. The
// gain of a place is by how much it narrows the errors where a bound may lie, weighted by the
// chance that the bound is there and that the other wants are met. After each choice the errors are
// taken as narrowed by it, so that a batch spreads.
//
// Ref: the targeted error of V. Picheny, D. Ginsbourger, O. Roustant, R. T. Haftka and N.-H. Kim,
// J. Mech. Des. 132, 071008 (2010), here with the relative narrowing (from memory).
func (s *search) next(count int) [][]float64 {
	n := len(s.places)
	covariances := make([]*mat.SymDense, len(s.wants))
	weights := make([][]float64, len(s.wants))
	meets := make([][]float64, len(s.wants))
	for k, w := range s.wants {
		mean, cov := s.models[k].model.Joint(s.places)
		covariances[k], weights[k], meets[k] = cov, make([]float64, n), make([]float64, n)
		for i := range n {
			sd := math.Sqrt(math.Max(cov.At(i, i), 1e-300))
			z := (s.models[k].bound(w) - mean[i]) / sd
			weights[k][i] = distuv.UnitNormal.Prob(z)
			meets[k][i] = s.models[k].meets(w, mean[i], sd)
		}
	}
	for k := range s.wants {
		for j := range s.wants {
			for i := range n {
				if j != k {
					weights[k][i] *= meets[j][i]
				}
			}
		}
	}
	var chosen [][]float64
	for range count {
		best, most := 0, -1.0
		for c := range n {
			gain := 0.0
			for k, cov := range covariances {
				gain += narrowing(cov, weights[k], c, s.models[k].noise)
			}
			if gain > most {
				best, most = c, gain
			}
		}
		chosen = append(chosen, s.places[best])
		for k, cov := range covariances {
			condition(cov, best, s.models[k].noise)
		}
	}
	return chosen
}

// narrowing is the weighted sum over all places of the part by which their standard error falls
// when the place c is observed with the variance noise.
func narrowing(cov *mat.SymDense, weight []float64, c int, noise float64) float64 {
	precision := 1 / (cov.At(c, c) + noise + 1e-300)
	sum := 0.0
	for i, w := range weight {
		v := cov.At(i, i)
		if w < 1e-6 || v <= 0 {
			continue
		}
		share := cov.At(i, c) * cov.At(i, c) * precision / v
		sum += w * (1 - math.Sqrt(math.Max(0, 1-share)))
	}
	return sum
}

// condition narrows the covariances by an observation of the place c.
func condition(cov *mat.SymDense, c int, noise float64) {
	n := cov.SymmetricDim()
	column := make([]float64, n)
	for i := range n {
		column[i] = cov.At(i, c)
	}
	cov.SymRankOne(cov, -1/(column[c]+noise+1e-300), mat.NewVecDense(n, column))
}

// recommended returns the place of the largest (or smallest) expected quantity k among those that
// are in the window with the asked-for probability, and whether there is one; without, the place
// that is most probably in it.
func (s *search) recommended(k int, largest bool, probability float64) (u []float64, inside bool) {
	best, likely, most := math.Inf(-1), 0, -1.0
	for i, place := range s.places {
		p := s.probability(place)
		if p > most {
			likely, most = i, p
		}
		if p < probability {
			continue
		}
		value := p
		if k >= 0 {
			value = s.models[k].at(place).Mean
			if !largest {
				value = -value
			}
		}
		if value > best {
			u, best, inside = place, value, true
		}
	}
	if !inside {
		return s.places[likely], false
	}
	return u, true
}

func median(v []float64) float64 { return slices.Sorted(slices.Values(v))[len(v)/2] }

// tooFew says that the surrogates need more points.
func tooFew(have, dimensions int) error {
	return fmt.Errorf("%d points with trusted results, want at least %d for %d inputs: give the "+
		"plan more points", have, dimensions+2, dimensions)
}
