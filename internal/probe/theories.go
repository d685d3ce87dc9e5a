package probe

import (
	"fmt"
	"math"

	"ionfall/internal/phys"
)

// theories adds the ion densities that the same current gives by other theories, and the RF bound.
func (r *reduction) theories() {
	c := r.result.fit
	t := c.shape.temperature
	at := c.potential - ionReference*t
	reached := at >= r.cleaned.voltage[0]
	if !reached {
		at = r.cleaned.voltage[0]
	}
	current, chi := c.ions(at), (c.potential-at)/t
	ion := r.result.Get(KeyIonDensity)
	relative := ion.SE / ion.Value
	add := func(key, label string, density float64) {
		q := Quantity{density, relative * density, "1/m3", ""}
		if !ion.Known() || !(density > 0) {
			q = unknown("1/m3", "no ion current to speak of")
		}
		r.result.Methods = append(r.result.Methods, Method{key, label, q})
	}
	flux := phys.ElementaryCharge * r.setup.Area() * r.setup.ionFlux(t)
	add("ion_density_oml_m3", "ion density, orbital-motion limit",
		current/flux/(2/math.SqrtPi*math.Sqrt(chi)))
	add("ion_density_parametrised_m3", "ion density, parametrised orbital motion",
		current/flux/ParametrisedCurrent(c.rho, chi))
	add("ion_density_radial_m3", "ion density, radial motion (ABR)",
		RadialDensity(r.setup, current, c.potential-at, t))
	r.result.Methods = append(r.result.Methods, Method{
		"radius_over_debye", "tip radius over Debye length",
		Quantity{c.rho, c.rho * r.relativeError(KeyElectronDensity) / 2, "", ""},
	})
	theory := "the orbital-motion limit"
	if c.rho > 2 {
		theory = "the table of orbital motion"
	}
	if c.tau > coldIons {
		theory += fmt.Sprintf(" of ions with %.2g of the electrons' temperature", c.tau)
	}
	if c.rho > mostTable {
		r.caution("the tip radius is %.3g Debye lengths: the ion density follows from the "+
			"current at %d, where the tables end", c.rho, mostTable)
	}
	if c.tau > warmIons {
		r.caution("the ions are warmer than the electrons: the ion density follows from a table of " +
			"ions that are as warm")
	}
	r.note("ion density by %s: tip radius over Debye length is %.2g", theory, c.rho)
	r.warmth(c)
	if !reached {
		r.caution("the sweep reaches only %.2g temperatures below the plasma potential: the ion "+
			"density rests on theory more than on current", chi)
	}
	r.rfBound()
}

// warmth states what the ion density rests on where the temperature of the ions is not known: that
// of the gas is their lowest.
func (r *reduction) warmth(c *characteristic) {
	if r.setup.IonTemperature > 0 || c.tau >= someIons {
		return
	}
	ratio := WarmCurrent(c.tau, c.rho, ionReference) / WarmCurrent(someIons, c.rho, ionReference)
	r.note("the ions were taken to be as warm as the gas, %.2g of the electrons' temperature; at "+
		"%.2g of it the ion density would be %.2g %% lower. Give ion_temperature where it is known",
		c.tau, someIons, 100*(1-ratio))
}

func (r *reduction) relativeError(key string) float64 {
	q := r.result.Get(key)
	return q.SE / q.Value
}

// RadialDensity is the ion density [1/m3] at which cold ions in radial motion give the current [A]
// at the voltage [V] below the plasma potential, electrons of the temperature [eV].
func RadialDensity(setup *Setup, current, voltage, temperature float64) float64 {
	perLength := current * 2 * math.Pi * setup.Radius / setup.Area()
	speed := math.Sqrt(2 * phys.ElementaryCharge * temperature / setup.IonMass)
	ratio := func(n float64) float64 {
		debye := DebyeLength(n, temperature)
		j := perLength / (2 * math.Pi * debye * phys.ElementaryCharge * n * speed)
		return RadialPotential(j, setup.Radius/debye) / (voltage / temperature)
	}
	// A larger density needs a smaller potential for the same current.
	lo, hi := 1e11, 1e20
	if !(current > 0) || ratio(lo) < 1 || ratio(hi) > 1 {
		return math.NaN()
	}
	for hi/lo > 1+1e-4 {
		mid := math.Sqrt(lo * hi)
		if ratio(mid) > 1 {
			lo = mid
		} else {
			hi = mid
		}
	}
	return math.Sqrt(lo * hi)
}

// chi2At95 is the 95 % point of chi-square with one degree of freedom, one-sided.
const chi2At95 = 2.706

// rfBound states the residual RF amplitude that the bend of the characteristic allows: by the
// profile of chi-square over it.
func (r *reduction) rfBound() {
	best := &r.candidates[0]
	free := freeOf(candidate{kind: best.kind})
	t := r.result.fit.shape.temperature
	limit := best.chi2/(r.scale*r.scale) + chi2At95
	profile := func(v1 float64) float64 {
		start := append([]float64(nil), best.p...)
		start[parRF] = v1 * v1
		f, err := best.model.fit(start, free, r.used)
		if err != nil {
			return math.Inf(1)
		}
		return f.chi2 / (r.scale * r.scale)
	}
	lo, hi := r.result.fit.rf, r.result.fit.rf+0.1*t
	for profile(hi) < limit && hi < 6*t {
		lo, hi = hi, 1.6*hi
	}
	text := fmt.Sprintf("not bounded below %.2g V", hi)
	if hi < 6*t {
		for range 7 {
			if mid := (lo + hi) / 2; profile(mid) < limit {
				lo = mid
			} else {
				hi = mid
			}
		}
		text = fmt.Sprintf("below %.2g V (95 %%)", hi)
	}
	r.result.Methods = append(r.result.Methods, Method{
		"rf_amplitude_bound_V", "residual RF amplitude, upper bound (95 %)",
		Quantity{hi, 0, "V", ""},
	})
	switch {
	case best.rf && r.result.fit.rf > 0:
		r.caution("the knee is bent as by a residual RF amplitude of %.2g V, %s; it is taken into "+
			"account. The rounding by a tip that is not clean looks the same", r.result.fit.rf, text)
	case hi > 0.5*t:
		r.note("residual RF amplitude: %s; below half a temperature is wanted", text)
	default:
		r.note("residual RF amplitude: %s", text)
	}
}
