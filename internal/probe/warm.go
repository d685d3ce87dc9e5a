package probe

import (
	"math"

	"ionfall/internal/phys"
)

// coldest and warmest ratio of ion to electron temperature of the tables.
const (
	coldIons  = 0.02
	someIons  = 0.1
	warmIons  = 1.0
	mostTable = 50 // tip radius over Debye length
)

// warmTables are the tables of orbital motion for the ratios of ion to electron temperature 0.1 and
// 1, normalised like orbitalTable with the electrons' temperature, and of the same source.
func warmTables() (tenth, equal [][]float64) {
	tenth = [][]float64{
		{1.183, 1.183, 1.183, 1.178, 1.131, 1.078, 1.024},
		{1.987, 1.987, 1.987, 1.857, 1.594, 1.403, 1.247},
		{2.549, 2.549, 2.533, 2.228, 1.805, 1.525, 1.306},
		{3.587, 3.587, 3.493, 2.834, 2.139, 1.708, 1.387},
		{4.386, 4.386, 4.199, 3.278, 2.384, 1.843, 1.447},
		{5.654, 5.654, 5.288, 3.970, 2.770, 2.057, 1.544},
	}
	equal = [][]float64{
		{1.556, 1.556, 1.556, 1.550, 1.523, 1.487, 1.439},
		{2.242, 2.242, 2.227, 2.152, 1.977, 1.802, 1.638},
		{2.756, 2.751, 2.702, 2.544, 2.221, 1.940, 1.703},
		{3.740, 3.703, 3.572, 3.232, 2.622, 2.157, 1.798},
		{4.512, 4.441, 4.239, 3.750, 2.918, 2.319, 1.870},
		{5.754, 5.618, 5.301, 4.566, 3.384, 2.576, 1.984},
	}
	return tenth, equal
}

// WarmCurrent is i(rho, chi) for the ratio tau of ion to electron temperature: OrbitalCurrent up to
// 0.02, and between that, 0.1 and 1 interpolated in the logarithm of tau.
func WarmCurrent(tau, rho, chi float64) float64 {
	if !(tau > coldIons) || chi <= 0 {
		return OrbitalCurrent(rho, chi)
	}
	tau = math.Min(tau, warmIons)
	tenth, equal := warmTables()
	lo, hi := OrbitalCurrent(rho, chi), warmAt(tenth, someIons, rho, chi)
	from, to := coldIons, someIons
	if tau > someIons {
		lo, hi = hi, warmAt(equal, warmIons, rho, chi)
		from, to = someIons, warmIons
	}
	u := math.Log(tau/from) / math.Log(to/from)
	return math.Exp((1-u)*math.Log(lo) + u*math.Log(hi))
}

// warmAt is the current of one table. What is interpolated is the part of the orbital-motion limit
// that is collected: it is 1 for thin tips and at the plasma potential.
func warmAt(table [][]float64, tau, rho, chi float64) float64 {
	limit := func(chi float64) float64 { return math.Sqrt(tau) * OMLCylinder(chi/tau) }
	rhos, chis := orbitalNodes()
	rho = math.Min(math.Max(rho, rhos[0]), rhos[len(rhos)-1])
	j, u := bracket(rhos, rho)
	at := func(i int) float64 {
		return ((1-u)*table[i][j] + u*table[i][j+1]) / limit(chis[i])
	}
	if chi < chis[0] {
		return limit(chi) * (1 + chi/chis[0]*(at(0)-1))
	}
	i, v := bracket(chis, chi)
	return limit(chi) * math.Exp((1-v)*math.Log(at(i))+v*math.Log(at(i+1)))
}

// ionRatio is that of ion to electron temperature [eV]; ions are as warm as the gas where nothing
// else is known.
func (s *Setup) ionRatio(temperature float64) float64 {
	ions := s.IonTemperature
	if ions == 0 {
		ions = s.Temperature
	}
	return ions * phys.Boltzmann / phys.ElementaryCharge / temperature
}
