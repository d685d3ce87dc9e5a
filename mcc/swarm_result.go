package mcc

import (
	"math"

	"ionfall/internal/stats"
)

// SwarmResult holds the transport coefficients of a swarm. N is the density of the whole gas.
type SwarmResult struct {
	Field       float64 // E/N [Td]
	Density     float64 // N [1/m3]
	Temperature float64 // density-weighted mean of the gas [K]

	MeanEnergy stats.Estimate // mean energy of a particle [eV]
	FluxDrift  stats.Estimate // mean velocity along the force [m/s]
	BulkDrift  stats.Estimate // velocity of the swarm's centre along the force [m/s]
	// Mobility is the flux drift velocity over the field at the density 2.6867811e25 /m3 (273.15 K,
	// 101325 Pa) [cm2/(V s)].
	Mobility stats.Estimate
	// DiffusionTransverse and DiffusionLongitudinal are bulk diffusion coefficients times N
	// [1/(m s)]: half the growth of the variance of positions, divided by time.
	DiffusionTransverse, DiffusionLongitudinal stats.Estimate
	// Ionization is the births, Loss the particles taken by attachment or reactions, and Growth the
	// difference, each a particle and time over N [m3/s].
	Ionization, Loss, Growth stats.Estimate
	// Townsend is the growth per length of a stationary beam over N [m2]; see townsendOf.
	Townsend stats.Estimate
	Rates    []SwarmRate
	Energies SwarmEnergies

	// Beyond is the part of the particles above the energy up to which the collision
	// frequencies are tabulated, and Extrapolated the part of the collisions there or
	// judged by an extrapolated cross section.
	Beyond, Extrapolated float64
	Run                  SwarmRun
}

// SwarmRate is the rate coefficient of one process.
type SwarmRate struct {
	Gas, Process string
	Rate         stats.Estimate // collisions a time, over the density of this gas [m3/s]
}

// SwarmEnergies is an energy distribution in bins of equal width in speed.
type SwarmEnergies struct {
	EdgesEV []float64 // edges of the bins, one more than bins [eV]
	// EEPF is the distribution f of a mean over the bin such that the integral of sqrt(E) f dE is
	// 1 [eV^-3/2], with its standard errors.
	EEPF, StdErr []float64
}

// CenterEV returns the energy in the middle of a bin [eV].
func (d *SwarmEnergies) CenterEV(bin int) float64 {
	return 0.5 * (d.EdgesEV[bin] + d.EdgesEV[bin+1])
}

// SwarmRun says how the result was obtained.
type SwarmRun struct {
	Particles  int     // smallest number
	Steps      int     // taken in all
	TimeStep   float64 // while measuring [s]
	Candidates float64 // collision candidates a particle and step
	TopEnergy  float64 // of the tables [eV]
	Relaxation float64 // until the cold and the hot start agreed [s]
	Warmup     float64 // left out of all means [s]
	Measured   float64 // averaged [s]
	Windows    int     // stretches of time from which bulk coefficients were taken
	Doublings  int     // times the swarm was thinned to half
	Thinnings  int     // of which while measuring
	// Drift is the difference of the mean energy between the last and the first third of the
	// measurement, in its standard errors.
	Drift   float64
	Reached bool // the errors asked for were reached within the budget
}

// loschmidt is the density of an ideal gas at 273.15 K and 101325 Pa [1/m3], to which mobilities
// are reduced.
const loschmidt = 2.6867811e25

// scaled returns the estimate in another unit.
func scaled(e stats.Estimate, factor float64) stats.Estimate {
	e.Mean *= factor
	e.StdErr *= math.Abs(factor)
	return e
}

// townsendOf returns the stationary growth per length over N, alpha/N, of the solution
// exp(alpha z) of D alpha^2 - W alpha + nu = 0 for bulk coefficients W, N D and nu/N:
//
//	alpha/N = (W - sqrt(W^2 - 4 ND nu/N)) / (2 ND)
//
// The errors of the three are taken as independent. Where the root is not real no stationary
// beam exists, and the result is no number.
//
// Ref: H. Tagashira, Y. Sakai and S. Sakamoto, J. Phys. D 10, 1051 (1977) (from memory).
func townsendOf(drift, diffusion, growth stats.Estimate) stats.Estimate {
	of := func(w, d, nu float64) float64 {
		return 2 * nu / (w + math.Sqrt(w*w-4*d*nu))
	}
	w, d, nu := drift.Mean, diffusion.Mean, growth.Mean
	e := stats.Estimate{Mean: of(w, d, nu), N: diffusion.N, Batch: diffusion.Batch}
	if nu == 0 {
		return e
	}
	// Derivatives of the root, from the equation it solves.
	a := e.Mean
	slope := w - 2*d*a
	e.StdErr = math.Sqrt(sum2(a*drift.StdErr, a*a*diffusion.StdErr, growth.StdErr)) / slope
	return e
}

func sum2(list ...float64) float64 {
	sum := 0.0
	for _, x := range list {
		sum += x * x
	}
	return sum
}
