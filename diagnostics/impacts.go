package diagnostics

import (
	"math"

	"ionfall/pic"
)

// impactRecord is what one species does to one electrode, over the running batch and before.
type impactRecord struct {
	energies *bins
	coarse   *bins
	// by period, for the scalars' errors
	counts, energy []float64   // particles [1/m2] and their energy [eV/m2]
	above          [][]float64 // by threshold: particles [1/m2]
	// of the running batch [1/m2]
	spectrum, angles []float64
	// by batch [1/(m2 s)]
	spectra [][]float64
}

// hitRecord is the part of one chunk, since the last flush. Energies are summed as integers, so
// that everything here is exact and is saved alike.
type hitRecord struct {
	spectrum, angles []int64
	above            []int64
	sums             []int64 // number of hits, their energy in microelectronvolts
}

const (
	sumCount = iota
	sumEnergy
	sumAll
)

// perMicro is microelectronvolts in an eV.
const perMicro = 1e6

func newImpactRecord(energies *bins, thresholds int) *impactRecord {
	top := energies.edges[len(energies.edges)-1]
	coarse := uniformBins(top, angleEnergyBins)
	return &impactRecord{
		energies: energies, coarse: coarse,
		above:    make([][]float64, thresholds),
		spectrum: make([]float64, energies.count()),
		angles:   make([]float64, coarse.count()*angleBins),
	}
}

func newHitRecord(r *impactRecord) hitRecord {
	return hitRecord{
		spectrum: make([]int64, len(r.spectrum)), angles: make([]int64, len(r.angles)),
		above: make([]int64, len(r.above)), sums: make([]int64, sumAll),
	}
}

// Hits implements pic.Observer.
func (r *Recorder) Hits(species, chunk int, hits []pic.Hit) {
	rec := r.species[species]
	if !r.on || rec.impacts[0] == nil {
		return
	}
	for _, h := range hits {
		side := math.Hypot(h.VY, h.VZ)
		energy := rec.eVPerV2 * (h.VX*h.VX + side*side)
		angle := math.Atan2(side, math.Abs(h.VX)) * (180 / math.Pi)
		impact := rec.impacts[h.Wall]
		mine := &rec.chunks[chunk].hits[h.Wall]
		mine.sums[sumCount]++
		mine.sums[sumEnergy] += int64(energy*perMicro + 0.5)
		mine.spectrum[impact.energies.find(energy)]++
		a := min(angleBins-1, int(angle*angleBins/90))
		mine.angles[impact.coarse.find(energy)*angleBins+a]++
		for k, t := range r.thresholds {
			if energy > t {
				mine.above[k]++
			}
		}
	}
}

// flush adds what the chunks counted in a period, with the weight that the particles had per area
// of the powered electrode, for the area of each.
func (rec *speciesRecord) flush(config *pic.Config, weight float64) {
	if rec.impacts[0] == nil {
		return
	}
	whole := weight
	for wall, r := range rec.impacts {
		weight := whole / config.WallArea(pic.Wall(wall))
		var count, energy float64
		above := make([]float64, len(r.above))
		for c := range rec.chunks {
			h := &rec.chunks[c].hits[wall]
			count += float64(h.sums[sumCount])
			energy += float64(h.sums[sumEnergy]) / perMicro
			for k, n := range h.above {
				above[k] += float64(n)
			}
			addCounts(r.spectrum, h.spectrum, weight)
			addCounts(r.angles, h.angles, weight)
			clear(h.above)
			clear(h.sums)
		}
		r.counts = append(r.counts, weight*count)
		r.energy = append(r.energy, weight*energy)
		for k := range above {
			r.above[k] = append(r.above[k], weight*above[k])
		}
	}
}

// addCounts adds weight times the counts and clears them.
func addCounts(sum []float64, counts []int64, weight float64) {
	for i, n := range counts {
		if n != 0 {
			sum[i] += weight * float64(n)
			counts[i] = 0
		}
	}
}
