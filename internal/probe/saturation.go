package probe

import "math"

// nearRange is how far above the plasma potential the fit reaches that asks whether the form of the
// saturation matters [T]; kneeRange is that of the fit itself.
const nearRange = 0.6

// hidden is how much of the noise of that question counts as an error when the answer is no.
const hidden = 0.5

// noFit is the chi-square per degree of freedom from which a density would rest on a form that the
// data contradict.
const noFit = 4.0

// refuse takes away what a characteristic that no form fits cannot tell.
func (r *reduction) refuse() {
	if !(r.result.ChiSquare > noFit) {
		return
	}
	for i := range r.result.Quantities {
		q := &r.result.Quantities[i]
		switch q.Key {
		case KeyElectronDensity, KeyIonDensity, KeyPlasma, KeyTemperature:
			q.Quantity = unknown(q.Unit, "no form fits the characteristic, so the knee cannot be told: "+
				"noise that was underrated, a tip that is not clean, or a holder that draws current")
		}
	}
}

// fitNearKnee repeats a fit with hardly any of the saturation. A form of it that is not the tip's
// moves the plasma potential, and the density with it, by an amount that depends on how much of it
// is fitted.
func (r *reduction) fitNearKnee(f *fitted, d *data) derived {
	out := derived{math.NaN(), math.NaN(), math.NaN(), math.NaN(), math.NaN()}
	c := f.model.characteristic(f.p)
	// A residual RF voltage carries the tip further up by its amplitude.
	near, err := f.model.fit(f.p, f.free, d.within(c.potential+nearRange*c.shape.coldest+c.rf))
	if err != nil {
		return out
	}
	return derive(near, d)
}

// saturationError is the variance of a number by the form of the saturation: what a fit near the
// knee differs by, beyond noise; or half of what noise would hide of that.
func (r *reduction) saturationError(i int, near derived) float64 {
	joint := r.spreadOf(func(s *sample) float64 { return s.nearKnee[i] - s.derived[i] })
	difference := near[i] - r.center[i]
	if math.IsNaN(difference) || math.IsNaN(joint) {
		return 0
	}
	return math.Max(difference*difference-joint*joint, hidden*hidden*joint*joint)
}
