package probe

import (
	"fmt"
	"math"
	"strings"
)

const (
	// oddsOfNoFit is the chance of a worse fit below which nothing fits.
	oddsOfNoFit = 0.01
	// tied is a correlation from which two inputs are not told apart.
	tied = 0.8
	// learned is how much narrower than the prior a posterior must be to have learned anything.
	learned = 0.85
	// endsWithin is how many standard deviations from an end of the prior a mean is taken as pressed
	// against it: half a normal distribution has 1.3.
	endsWithin = 1.5
	// fewDraws is an effective number of draws that numbers should not be taken from.
	fewDraws = 100
)

// Fits reports whether some value within the priors fits the data.
func (p *Posterior) Fits() bool { return p.Chance >= oddsOfNoFit }

// Findings say, for people, what the data tell about the inputs and what they do not.
func (p *Posterior) Findings() []string {
	var list []string
	if !p.Fits() {
		list = append(list, fmt.Sprintf("no value within the priors fits the data: chi-square is at "+
			"least %.3g, and larger by chance in %.2g of cases; the numbers below are the least bad, not "+
			"an answer. Look for what is wrong in priors, probe or model", p.BestChi2, p.Chance))
	}
	if p.Effective < fewDraws {
		list = append(list, fmt.Sprintf("the sample of the posterior is worth only %.0f independent "+
			"draws: widths are rough", p.Effective))
	}
	inputs := p.Problem.Inputs
	for i := range inputs {
		mean, sd := Moments(p.Draws, i)
		_, before := Moments(p.Prior, i)
		switch {
		case sd > learned*before:
			list = append(list, fmt.Sprintf("the data say next to nothing about %s: its error is %.0f %% "+
				"of that of the prior", inputs[i].Path, 100*sd/before))
		case mean-inputs[i].Lo < endsWithin*sd || inputs[i].Hi-mean < endsWithin*sd:
			list = append(list, fmt.Sprintf("%s lies at an end of its prior: the data might want a value "+
				"beyond it", inputs[i].Path))
		}
		for j := range i {
			if r := Correlation(p.Draws, i, j); math.Abs(r) > tied {
				list = append(list, fmt.Sprintf("the data cannot tell %s and %s apart (correlation %.2f): "+
					"they fix a combination of both, and each alone only as far as the prior of the other",
					inputs[j].Path, inputs[i].Path, r))
			}
		}
	}
	return list
}

// Verdict is one sentence.
func (p *Posterior) Verdict() string {
	if !p.Fits() {
		return "Nothing fits: no value of the free inputs within their priors agrees with the data."
	}
	var parts []string
	for i := range p.Problem.Predicted {
		q := &p.Problem.Predicted[i]
		_, before := Moments(p.Prior, len(p.Problem.Inputs)+i)
		_, after := Moments(p.Draws, len(p.Problem.Inputs)+i)
		parts = append(parts, fmt.Sprintf("%s by a factor of %.2g", q.Label, before/after))
	}
	return "The data agree with the model for some inputs, and narrow the prediction: " +
		strings.Join(parts, ", ") + "."
}

// DataCovariance is that of measured quantities of one reduction: errors as stated, correlations as
// seen among the resampled data.
func (r *Result) DataCovariance(keys []string) [][]float64 {
	names := derivedKeys()
	place := map[string]int{}
	for i, k := range names {
		place[k] = i
	}
	out := make([][]float64, len(keys))
	for i, a := range keys {
		out[i] = make([]float64, len(keys))
		for j, b := range keys {
			c := 1.0
			if i != j {
				c = r.correlation[place[a]][place[b]]
			}
			out[i][j] = c * r.Get(a).SE * r.Get(b).SE
		}
	}
	return out
}

// correlations of the derived quantities among the resamplings, drawn a little towards none so
// that few resamplings leave the matrix invertible.
func (r *reduction) correlations() [5][5]float64 {
	var rows [][]float64
	for i := range r.samples {
		row := r.samples[i].derived[:]
		finite := true
		for _, x := range row {
			finite = finite && !math.IsNaN(x)
		}
		if finite {
			rows = append(rows, row)
		}
	}
	var out [5][5]float64
	if len(rows) < 10 {
		return out
	}
	const shrink = 0.9
	for i := range 5 {
		for j := range 5 {
			if i != j {
				out[i][j] = shrink * Correlation(rows, i, j)
			}
		}
	}
	return out
}
