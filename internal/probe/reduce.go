package probe

import (
	"fmt"
	"math"
)

// Reduce finds density, temperature and potentials from sweeps of one place and time, with errors
// on all of them.
//
// The characteristic up to a little above the plasma potential is fitted with several forms of the
// distribution (Maxwellian, Druyvesteyn, a general exponent, two temperatures), each with and
// without a residual RF voltage; the criterion of Schwarz chooses. Derivatives by the filter of
// Savitzky and Golay give the plasma potential in three more ways and density and temperature as
// integrals of the EEPF. Errors are from resampled sweeps (five and more) or from noise as seen on
// the fit, with windows drawn at random, and are widened by what the forms and the ways disagree
// about beyond their own errors.
func Reduce(sweeps []Sweep, setup *Setup, choices Choices) (*Result, error) {
	d, err := clean(sweeps, setup)
	if err != nil {
		return nil, err
	}
	g, err := look(d)
	if err != nil {
		return nil, err
	}
	r := &reduction{
		sweeps: sweeps, setup: setup, choices: choices, cleaned: d, guess: g,
		result: &Result{Sweeps: len(sweeps), Points: len(d.voltage)},
	}
	if r.choices.Resamplings == 0 {
		r.choices.Resamplings = DefaultResamplings
	}
	r.noteCleaning()
	if !g.hasKnee {
		return r.withoutKnee()
	}
	return r.whole()
}

// reduction is the work of Reduce.
type reduction struct {
	sweeps  []Sweep
	setup   *Setup
	choices Choices
	cleaned *cleaned
	guess   *guess
	result  *Result

	candidates []scored
	used       *data    // points of the fit
	center     derived  // of the best form
	samples    []sample // of the resampling
	scale      float64  // of the noise, from the fit
}

func (r *reduction) note(format string, args ...any) {
	r.result.Notes = append(r.result.Notes, fmt.Sprintf(format, args...))
}

func (r *reduction) caution(format string, args ...any) {
	r.result.Cautions = append(r.result.Cautions, fmt.Sprintf(format, args...))
}

func (r *reduction) noteCleaning() {
	d := r.cleaned
	if d.outliers > 0 {
		r.note("%d points were left out as outliers", d.outliers)
	}
	if d.clippedHigh {
		r.caution("the current is clipped above %.4g V: points there were left out", d.clipVoltage)
	}
	if d.clippedLow {
		r.caution("the current is clipped at its lowest: points there were left out")
	}
	r.note("noise of a point: %.2g A and %.2g %% of the current", d.floor, 100*d.relative)
}

// whole is the reduction of a characteristic with a knee.
func (r *reduction) whole() (*Result, error) {
	var err error
	r.candidates, r.used, err = fitAll(r.cleaned, r.guess, r.setup)
	if err != nil {
		return nil, err
	}
	best := &r.candidates[0]
	c := best.model.characteristic(best.p)
	r.result.fit, r.result.Shape = c, best.kind
	freedom := float64(best.points - len(best.free))
	r.result.ChiSquare = best.chi2 / freedom
	r.scale = math.Sqrt(best.chi2 / freedom)
	if r.cleaned.atFloor {
		r.scale = math.Max(1, r.scale)
	}
	r.center = derive(best.fitted, r.used)
	smooth, err := r.resample()
	if err != nil {
		return nil, err
	}
	r.combine(smooth)
	r.result.correlation = r.correlations()
	r.theories()
	r.judge()
	r.refuse()
	r.tables(smooth)
	return r.result, nil
}

// withoutKnee states what a sweep that ends below the plasma potential supports.
func (r *reduction) withoutKnee() (*Result, error) {
	const reason = "the sweep shows no knee: it ends below the plasma potential, or noise hides it"
	t, tSE, f, fSE := r.exponential()
	r.result.Shape = "not known"
	r.result.ChiSquare = math.NaN()
	r.result.Quantities = []Named{
		{KeyElectronDensity, "electron density", unknown("1/m3", reason)},
		{KeyIonDensity, "ion density", unknown("1/m3", "needs the plasma potential; "+reason)},
		{KeyTemperature, "electron temperature", Quantity{t, tSE, "eV", ""}},
		{KeyPlasma, "plasma potential", unknown("V", reason)},
		{KeyFloating, "floating potential", Quantity{f, fSE, "V", ""}},
	}
	for i := range r.result.Quantities {
		q := &r.result.Quantities[i]
		if q.Reason == "" && (math.IsNaN(q.Value) || math.IsNaN(q.SE)) {
			q.Quantity = unknown(q.Unit, "too few points in the exponential part")
		}
	}
	r.caution("%s; the temperature is a slope of the exponential part, not an average over the "+
		"distribution", reason)
	return r.result, nil
}
