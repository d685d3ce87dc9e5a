// Package fits holds the published formulas from which bundled tables are made. Energies are in
// eV, cross sections in m2.
package fits

import "math"

// Thresholds of the argon formulas [eV].
const (
	ArgonExcitationThreshold = 11.5
	ArgonIonizationThreshold = 15.8
)

// ArgonValidTo is the energy up to which the argon electron formulas are meant [eV].
const ArgonValidTo = 1000

// ArgonElastic is the elastic momentum-transfer cross section of electrons in argon. The bars
// of the published formula enclose its first two terms only.
//
// Ref: A. V. Phelps and Z. Lj. Petrovic, Plasma Sources Sci. Technol. 8, R21 (1999).
func ArgonElastic(e float64) float64 {
	return 1e-20 * (math.Abs(ArgonAmplitude(e)) + 0.05/sq(1+e/10) +
		0.01*e*e*e/(1+math.Pow(e/12, 6)))
}

// ArgonAmplitude is what stands between the bars of ArgonElastic, in 1e-20 m2. It changes its
// sign at the Ramsauer minimum, where the cross section therefore has a kink.
func ArgonAmplitude(e float64) float64 {
	low := 6 / math.Pow(1+e/0.1+sq(e/0.6), 3.3)
	high := 1.1 * math.Pow(e, 1.4) / (1 + math.Pow(e/15, 1.2)) /
		math.Sqrt(1+math.Pow(e/5.5, 2.5)+math.Pow(e/60, 4.1))
	return low - high
}

// ArgonExcitation is the sum of all excitations of argon by electrons, at a loss of 11.5 eV.
//
// Ref: as ArgonElastic.
func ArgonExcitation(e float64) float64 {
	x := e - ArgonExcitationThreshold
	if x <= 0 {
		return 0
	}
	return 1e-20 * (0.034*math.Pow(x, 1.1)*(1+math.Pow(e/15, 2.8))/(1+math.Pow(e/23, 5.5)) +
		0.023*x/math.Pow(1+e/80, 1.9))
}

// ArgonIonization is the ionization of argon by electrons.
//
// Ref: as ArgonElastic.
func ArgonIonization(e float64) float64 {
	x := e - ArgonIonizationThreshold
	if x <= 0 {
		return 0
	}
	return 1e-20 * (970*x/sq(70+e) + 0.06*x*x*math.Exp(-e/9))
}

// ArgonIonIsotropic is the isotropic part of Ar+ on Ar; e is the laboratory energy. The exponent
// 2.3 is that of the author's tables in the open-access collection (the paper has 2.0).
//
// Ref: A. V. Phelps, J. Appl. Phys. 76, 747 (1994).
func ArgonIonIsotropic(e float64) float64 {
	return 2e-19/(math.Sqrt(e)*(1+e)) + 3e-19*e/math.Pow(1+e/3, 2.3)
}

// ArgonIonBackscatter is the backscattered part of Ar+ on Ar, so that isotropic plus twice the
// backscattered part is the momentum transfer; e is the laboratory energy.
//
// Ref: as ArgonIonIsotropic.
func ArgonIonBackscatter(e float64) float64 {
	momentum := 1.15e-18 * math.Pow(e, -0.1) * math.Pow(1+0.015/e, 0.6)
	return (momentum - ArgonIonIsotropic(e)) / 2
}

func sq(x float64) float64 { return x * x }
