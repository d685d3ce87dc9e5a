package surfaces

import "math"

// Emission describes what electrons do at a surface: the total yield by Vaughan's formula, of which
// a part is reflected elastically, a part comes back with less energy, and the rest are true
// secondaries.
//
// Refs: J. R. M. Vaughan, IEEE Trans. Electron Devices 36, 1963 (1989), with the exponents of 40,
// 830 (1993); the parts: A. Gopinath, J. P. Verboncoeur and C. K. Birdsall, Phys. Plasmas 5, 1535
// (1998) (the dependence on the angle, and the parts, from memory).
type Emission struct {
	MaxYield    float64 // largest yield at normal incidence
	MaxEnergyEV float64 // energy there [eV]
	ThresholdEV float64 // no emission below [eV]
	// Smoothness is Vaughan's k_s: 0 rough, 1 typical, 2 polished.
	Smoothness float64
	// Elastic and Inelastic are the parts of the yield that are reflected with all and with a part
	// of their energy.
	Elastic, Inelastic float64
}

// Yield returns the mean number of electrons that leave for one that arrives.
func (e *Emission) Yield(energyEV, angle float64) float64 {
	turn := e.Smoothness * angle * angle / math.Pi
	w := (energyEV - e.ThresholdEV) / (e.MaxEnergyEV*(1+turn) - e.ThresholdEV)
	if w <= 0 {
		return 0
	}
	return e.MaxYield * (1 + turn/2) * vaughan(w)
}

// vaughan is the yield over its largest value, for the energy above the threshold over that where
// the yield is largest.
func vaughan(w float64) float64 {
	k := 0.56
	switch {
	case w > 3.6:
		return 1.125 * math.Pow(w, -0.35)
	case w > 1:
		k = 0.25
	}
	return math.Pow(w*math.Exp(1-w), k)
}

// SecondaryEnergyEV returns the energy of a true secondary electron, for a uniform number u in
// 0..1: f(E) ~ E/(E + workFunction)^4, cut off at the energy of the primary.
//
// Ref: M. S. Chung and T. E. Everhart, J. Appl. Phys. 45, 707 (1974).
func SecondaryEnergyEV(u, workFunctionEV, primaryEV float64) float64 {
	u *= chungEverhart(primaryEV / workFunctionEV)
	low, high := 0.0, primaryEV/workFunctionEV
	for range 60 {
		if x := 0.5 * (low + high); chungEverhart(x) < u {
			low = x
		} else {
			high = x
		}
	}
	return low * workFunctionEV
}

// chungEverhart is the part of the secondaries below x work functions.
func chungEverhart(x float64) float64 { return 1 - (1+3*x)/((1+x)*(1+x)*(1+x)) }
