package mcc

import (
	"math"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

// PairRate is the rate coefficient of a reaction of two charged particles with each other,
// sigma(E) g, against their relative speed. It is read-only.
type PairRate struct {
	perSpeed float64   // rows per m/s
	rows     []float64 // rate coefficients [m3/s]
	lowest   float64   // speed below which the rate coefficient is that at it, or zero [m/s]
	onset    bool      // it is zero
	most     float64   // [m3/s]
}

// pairRows is the number of steps in the square root of the speed, which resolves slow pairs.
const pairRows = 4096

// NewPairRate tabulates the reaction of particles of the masses [kg], up to the energy [eV] of
// their relative motion.
func NewPairRate(t *crosssections.Table, masses [2]float64, topEV float64) *PairRate {
	mu := masses[0] * masses[1] / (masses[0] + masses[1])
	top := math.Sqrt(2 * topEV * phys.ElementaryCharge / mu)
	first := math.Max(t.Energy[0], 1e-6)
	r := &PairRate{
		perSpeed: pairRows / math.Sqrt(top), rows: make([]float64, pairRows+2),
		lowest: math.Sqrt(2 * first * phys.ElementaryCharge / mu), onset: t.Onset > 0,
	}
	for i := range r.rows {
		root := float64(i) / r.perSpeed
		g := math.Max(root*root, r.lowest)
		r.rows[i] = t.At(0.5*mu*g*g/phys.ElementaryCharge) * g
		r.most = math.Max(r.most, r.rows[i])
	}
	return r
}

// At returns the rate coefficient at the relative speed g [m/s], in m3/s.
func (r *PairRate) At(g float64) float64 {
	if r.onset && g < r.lowest {
		return 0
	}
	at := math.Min(math.Sqrt(math.Max(g, r.lowest))*r.perSpeed, pairRows)
	i := int(at)
	return r.rows[i] + (at-float64(i))*(r.rows[i+1]-r.rows[i])
}

// Most returns the largest rate coefficient [m3/s].
func (r *PairRate) Most() float64 { return r.most }
