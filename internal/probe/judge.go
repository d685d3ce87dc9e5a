package probe

import (
	"math"
	"slices"
)

const (
	// maxSink is the depletion parameter from which densities suffer: at 0.1 by 12 %.
	maxSink = 0.1
	// poorFit is the chi-square per degree of freedom from which the fit is not a fit.
	poorFit = 2.0
)

// Sink is the parameter psi of the depletion of electrons by a cylindrical probe.
//
// Refs: J. D. Swift, Proc. Phys. Soc. 79, 697 (1962); R. R. Arslanbekov, N. A. Khromov and A. A.
// Kudryavtsev, Plasma Sources Sci. Technol. 3, 528 (1994); from memory.
func Sink(setup *Setup) float64 {
	path := setup.freePath(setup.ElectronCrossSection)
	if math.IsInf(path, 1) {
		return 0
	}
	g := 0.71
	if setup.Radius < path {
		g = 4.0 / 3
	}
	return setup.Radius / (g * path) * math.Log(math.Pi*setup.Length/(4*setup.Radius))
}

// judge adds the cautions that follow from the conditions.
func (r *reduction) judge() {
	c := r.result.fit
	if r.result.ChiSquare > poorFit {
		r.caution("no form fits the characteristic within its noise (chi-square %.2g a degree of "+
			"freedom); errors are widened by it", r.result.ChiSquare)
	}
	if psi := Sink(r.setup); psi > maxSink {
		density, energy := SinkDensity(psi)
		r.caution("the probe takes electrons faster than they come (sink parameter %.2g, want below "+
			"%.2g): slow electrons are missing; a Maxwellian plasma would seem to have %.2g of its "+
			"density and %.3g of its mean energy, which is in the errors", psi, maxSink, density, energy)
		r.widen(KeyElectronDensity, 1-density)
		r.widen(KeyTemperature, energy-1)
	}
	debye := r.setup.Radius / c.rho
	sheath := debye * math.Sqrt2 / 3 * math.Pow(2*ionReference, 0.75) // Child's law at chi 10
	if path := r.setup.freePath(r.setup.IonCrossSection); sheath > path/4 {
		x := sheath / path
		radial := r.radialRatio(c)
		r.caution("ions collide in the sheath of the probe (thickness over mean free path %.2g, want "+
			"below 0.25): the ion current may be off by a factor of about %.2g, half of which, and "+
			"not more than half the density, is in its error", x, CollisionTrend(x, radial))
		r.widen(KeyIonDensity, math.Min(math.Abs(CollisionTrend(x, radial)-1)/2, 0.5))
		r.result.Methods = append(r.result.Methods, Method{
			"ion_collision_factor", "factor on the ion current by collisions, a trend only",
			Quantity{CollisionTrend(x, radial), math.NaN(), "", ""},
		})
	}
	if path := r.setup.freePath(r.setup.ElectronCrossSection); path < debye+r.setup.Radius {
		r.caution("the mean free path of electrons, %.2g mm, is not above tip radius and Debye length: "+
			"the theory of the electron current does not hold", 1e3*path)
	}
	if r.setup.Pressure == 0 {
		r.note("the pressure is not known: collisions could not be judged")
	}
	ne, ni := r.result.Get(KeyElectronDensity), r.result.Get(KeyIonDensity)
	if ne.Known() && ni.Known() {
		if q := ni.Value / ne.Value; q > 1.5 || q < 1/1.5 {
			r.caution("ion density is %.2g of the electron density: collisions, negative ions, or a "+
				"tip area other than stated", q)
		}
	}
	r.hysteresis()
}

// widen adds a relative error to a quantity.
func (r *reduction) widen(key string, relative float64) {
	for i := range r.result.Quantities {
		if q := &r.result.Quantities[i]; q.Key == key {
			q.SE = math.Hypot(q.SE, relative*q.Value)
		}
	}
}

// radialRatio is the radial current over that of orbital motion, for the density of the electrons.
func (r *reduction) radialRatio(c *characteristic) float64 {
	j := RadialCurrent(c.rho, ionReference)
	// i = J 2 pi lambda sqrt(2)/(2 pi rp) sqrt(2 pi).
	return j / c.rho * math.Sqrt(4*math.Pi) / WarmCurrent(c.tau, c.rho, ionReference)
}

// hysteresis compares sweeps up and down by the shift of voltage between them where the current is
// steep.
func (r *reduction) hysteresis() {
	c := r.result.fit
	var shifts [2][]float64
	for i := range r.sweeps {
		var moved []float64
		for k, v := range r.sweeps[i].Voltage {
			v -= r.setup.Resistance * r.sweeps[i].Current[k]
			u := (c.potential - v) / c.shape.temperature
			if u < 0.2 || u > 2 {
				continue
			}
			slope := (c.at(v+1e-3) - c.at(v-1e-3)) / 2e-3
			moved = append(moved, (c.at(v)-r.sweeps[i].Current[k])/slope)
		}
		if len(moved) == 0 {
			continue
		}
		side := 0
		if r.sweeps[i].Up {
			side = 1
		}
		shifts[side] = append(shifts[side], median(moved))
	}
	if len(shifts[0]) == 0 || len(shifts[1]) == 0 {
		return
	}
	shift := median(shifts[1]) - median(shifts[0])
	se := r.result.Get(KeyFloating).SE * math.Sqrt2
	for _, list := range shifts {
		if len(list) > 2 {
			se = math.Max(se, (slices.Max(list)-slices.Min(list))/math.Sqrt(float64(len(list))))
		}
	}
	if math.Abs(shift) > 3*se && math.Abs(shift) > c.shape.temperature/50 {
		r.caution("sweeps up lie %.2g V above those down: the tip or the plasma changes during a "+
			"sweep, or the sweep is too fast for the cable", shift)
		return
	}
	r.note("no hysteresis: up and down differ by %.2g V", shift)
}
