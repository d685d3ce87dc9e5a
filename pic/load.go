package pic

import (
	"fmt"
	"math"

	"ionfall/internal/kernels"
	"ionfall/internal/phys"
	"ionfall/internal/rng"
)

// Add puts one particle into the discharge: x [cells], velocity [m/s]. For tests and examples;
// Load fills a discharge.
func (s *Simulation) Add(species, chunkIndex int, x, vx, vy, vz float64) error {
	if !kernels.Inside(x, s.config.Cells) {
		return fmt.Errorf("pic: particle at %g cells, want 0 to %d", x, s.config.Cells)
	}
	sp := &s.species[species]
	unit := s.config.VelocityUnit(sp.Every)
	sp.chunks[chunkIndex].add(x, vx/unit, vy/unit, vz/unit)
	s.redeposit()
	return nil
}

// Load adds count particles of a species: positions follow the relative density at the nodes
// (len Cells+1), velocities a Maxwellian of the temperature [K].
//
// The start is quiet: position k is the (k + 1/2)/count quantile of the profile, so that the
// charge density of two species loaded alike is equal to within one particle a cell. Particles
// go to the chunks in an order without runs of neighbours.
func (s *Simulation) Load(species, count int, density []float64, temperature float64) error {
	if len(density) != s.config.Cells+1 {
		return fmt.Errorf("pic: density at %d nodes, want %d", len(density), s.config.Cells+1)
	}
	sp := &s.species[species]
	spread := math.Sqrt(phys.Boltzmann*temperature/sp.Mass) / s.config.VelocityUnit(sp.Every)
	stream := rng.Key{Seed: s.config.Seed, Purpose: rng.Loading, Species: uint16(species)}.Stream()
	place := newQuantiles(s.perLength(density))
	stride := coprime(count)
	for n := range count {
		k := int(int64(n) * int64(stride) % int64(count))
		x := place.at((float64(k) + 0.5) / float64(count))
		if !kernels.Inside(x, s.config.Cells) {
			x = float64(s.config.Cells) - 0x1p-20
		}
		sp.chunks[n%s.config.Chunks].add(x,
			spread*stream.Normal(), spread*stream.Normal(), spread*stream.Normal())
	}
	for c := range sp.chunks {
		sp.chunks[c].reserve()
	}
	s.redeposit()
	return nil
}

// perLength turns a density per volume into one per length.
func (s *Simulation) perLength(density []float64) []float64 {
	if s.area == nil {
		return density
	}
	list := make([]float64, len(density))
	for j := range list {
		list[j] = density[j] * s.area[j]
	}
	return list
}

// coprime returns a stride near the golden section of n that visits all of 0..n-1.
func coprime(n int) int {
	stride := max(1, int(0.6180339887*float64(n)))
	for gcd(stride, n) != 1 {
		stride++
	}
	return stride
}

func gcd(a, b int) int {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// quantiles inverts the integral of a density that is linear between nodes.
type quantiles struct {
	density, sum []float64
}

func newQuantiles(density []float64) *quantiles {
	q := &quantiles{density: density, sum: make([]float64, len(density))}
	for j := 1; j < len(density); j++ {
		q.sum[j] = q.sum[j-1] + 0.5*(density[j-1]+density[j])
	}
	return q
}

// at returns the position [cells] below which the part u of the particles lies.
func (q *quantiles) at(u float64) float64 {
	want := u * q.sum[len(q.sum)-1]
	low, high := 0, len(q.sum)-1
	for high-low > 1 {
		if mid := (low + high) / 2; q.sum[mid] <= want {
			low = mid
		} else {
			high = mid
		}
	}
	a, b := q.density[low], q.density[low+1]
	rest := want - q.sum[low]
	// a s + (b-a) s^2/2 = rest, in the form that does not cancel
	root := math.Sqrt(max(0, a*a+2*(b-a)*rest))
	if a+root == 0 {
		return float64(low)
	}
	return float64(low) + min(1, 2*rest/(a+root))
}
