package diagnostics

import (
	"math"

	"ionfall/internal/phys"
	"ionfall/internal/stats"
	"ionfall/pic"
)

// Impact sums up what one species, or all ions together, do to an electrode.
type Impact struct {
	MeanEnergyEV stats.Estimate
	Flux         stats.Estimate // [1/(m2 s)]
	EnergyFlux   stats.Estimate // [W/m2]
	// Above is the part of the ions above each threshold.
	Above []stats.Estimate
	// Percentiles are the energies below which 5, 50 and 95 % arrive [eV].
	Percentiles [3]stats.Estimate
}

// PercentileParts are the parts of the ions that Impact.Percentiles refer to.
var PercentileParts = [3]float64{0.05, 0.50, 0.95}

// Batches returns the number of finished batches and their length in periods.
func (r *Recorder) Batches() (n, length int) { return r.averages.profiles[0].N, r.batch }

// whole returns the number of periods in finished batches: only these are in any average, so
// that tables and scalars agree.
func (r *Recorder) whole() int {
	n, length := r.Batches()
	return n * length
}

// Impact returns the estimates for species i at a wall.
func (r *Recorder) Impact(i int, wall pic.Wall) Impact {
	return r.impact([]*impactRecord{r.species[i].impacts[wall]})
}

// AllImpacts returns the estimates for all ions together at a wall.
func (r *Recorder) AllImpacts(wall pic.Wall) Impact {
	return r.impact(r.impactsOf(wall, func(charge int) bool { return charge > 0 }))
}

// NeutralImpacts returns the estimates for all fast neutrals together at a wall; false if none are
// followed.
func (r *Recorder) NeutralImpacts(wall pic.Wall) (Impact, bool) {
	list := r.impactsOf(wall, func(charge int) bool { return charge == 0 })
	if len(list) == 0 {
		return Impact{}, false
	}
	return r.impact(list), true
}

// EnergeticImpacts returns the estimates for ions and fast neutrals together at a wall.
func (r *Recorder) EnergeticImpacts(wall pic.Wall) Impact {
	return r.impact(r.impactsOf(wall, func(charge int) bool { return charge >= 0 }))
}

// impactsOf are the records of the species whose charge is wanted.
func (r *Recorder) impactsOf(wall pic.Wall, wanted func(charge int) bool) []*impactRecord {
	var list []*impactRecord
	for _, rec := range r.species {
		if rec.impacts[wall] != nil && wanted(rec.charge) {
			list = append(list, rec.impacts[wall])
		}
	}
	return list
}

func (r *Recorder) impact(list []*impactRecord) Impact {
	n := r.whole()
	counts, energy := make([]float64, n), make([]float64, n)
	above := make([][]float64, len(r.thresholds))
	for k := range above {
		above[k] = make([]float64, n)
	}
	for _, im := range list {
		addTo(counts, im.counts[:n])
		addTo(energy, im.energy[:n])
		for k := range above {
			addTo(above[k], im.above[k][:n])
		}
	}
	out := Impact{
		MeanEnergyEV: stats.Ratio(energy, counts),
		Flux:         scaled(stats.Mean(counts), 1/r.config.Period),
		EnergyFlux:   scaled(stats.Mean(energy), phys.ElementaryCharge/r.config.Period),
	}
	for k := range above {
		out.Above = append(out.Above, stats.Ratio(above[k], counts))
	}
	for k, part := range PercentileParts {
		out.Percentiles[k] = r.percentile(list, part)
	}
	return out
}

func addTo(sum, v []float64) {
	for i, x := range v {
		sum[i] += x
	}
}

// scaled returns k times the estimate.
func scaled(e stats.Estimate, k float64) stats.Estimate {
	e.Mean *= k
	e.StdErr *= math.Abs(k)
	return e
}

// percentile returns the energy below which the given part of the ions arrives. Its error is that
// of the part below it, over the density of the distribution there.
func (r *Recorder) percentile(list []*impactRecord, part float64) stats.Estimate {
	b := list[0].energies
	sum := make([]float64, b.count())
	batches := len(list[0].spectra)
	for _, im := range list {
		for _, s := range im.spectra {
			addTo(sum, s)
		}
	}
	total := 0.0
	for _, f := range sum {
		total += f
	}
	bin, inside := locate(sum, part*total)
	if bin < 0 {
		return stats.Estimate{Mean: math.NaN(), StdErr: math.NaN()}
	}
	below, all := make([]float64, batches), make([]float64, batches)
	for n := range batches {
		for _, im := range list {
			for k, f := range im.spectra[n] {
				all[n] += f
				if k < bin {
					below[n] += f
				} else if k == bin {
					below[n] += inside * f
				}
			}
		}
	}
	e := stats.Ratio(below, all)
	near := sum[max(0, bin-1)] + sum[bin] + sum[min(len(sum)-1, bin+1)]
	width := b.edges[min(len(sum)-1, bin+1)+1] - b.edges[max(0, bin-1)]
	e.StdErr /= near / total / width
	e.Mean = b.edges[bin] + inside*b.width(bin)
	return e
}

// locate finds the bin in which the running sum passes want, and the part of it.
func locate(sum []float64, want float64) (bin int, inside float64) {
	at := 0.0
	for k, f := range sum {
		if f > 0 && at+f >= want {
			return k, (want - at) / f
		}
		at += f
	}
	return -1, 0
}

// CenterDensity returns the electron density averaged over the central tenth of the gap [1/m3].
func (r *Recorder) CenterDensity() stats.Estimate {
	return stats.Mean(r.averages.centerDensity[:r.whole()])
}

// CenterTemperatureEV returns two thirds of the mean electron energy in the central tenth [eV].
func (r *Recorder) CenterTemperatureEV() stats.Estimate {
	n := r.whole()
	e := stats.Ratio(r.averages.centerEnergy[:n], r.averages.centerDensity[:n])
	return scaled(e, 2.0/3)
}

// PlasmaPotential returns the potential in the middle of the gap [V].
func (r *Recorder) PlasmaPotential() stats.Estimate {
	return stats.Mean(r.averages.midGap[:r.whole()])
}

// PeakDensity returns the largest of the time-averaged electron densities on x [1/m3]; the error is
// that of the node where it lies.
func (r *Recorder) PeakDensity() stats.Estimate {
	v := r.averages.profiles[gridFixed+gridDensity]
	best := 0
	for j, n := range v.Mean {
		if n > v.Mean[best] {
			best = j
		}
	}
	return stats.Estimate{Mean: v.Mean[best], StdErr: v.StdErr(best), N: v.N, Batch: r.batch}
}

// Sheath returns the mean width of the sheath at a wall [m].
func (r *Recorder) Sheath(wall pic.Wall) stats.Estimate {
	e := stats.Mean(r.averages.sheath[wall])
	e.Batch *= r.batch
	return e
}

// Progress returns the running estimates of the mean ion energy [eV] and ion flux [1/(m2 s)] of
// all ions at a wall, over the periods recorded so far.
func (r *Recorder) Progress(wall pic.Wall) (energy, flux stats.Estimate) {
	var counts, sum []float64
	for _, rec := range r.species {
		if im := rec.impacts[wall]; im != nil && rec.charge > 0 {
			if counts == nil {
				counts, sum = make([]float64, len(im.counts)), make([]float64, len(im.counts))
			}
			addTo(counts, im.counts)
			addTo(sum, im.energy)
		}
	}
	return stats.Ratio(sum, counts), scaled(stats.Mean(counts), 1/r.config.Period)
}

// IonsWithin returns the positive ions between a wall and a distance from it, per area of the
// powered electrode [1/m2].
func (r *Recorder) IonsWithin(wall pic.Wall, distance float64) float64 {
	dx := r.config.CellSize()
	sum := 0.0
	for i, rec := range r.species {
		if rec.charge <= 0 {
			continue
		}
		mean := r.averages.profiles[gridFixed+gridPerSpecies*i+gridDensity].Mean
		for j := range mean {
			at := float64(j) * dx
			if wall == pic.Grounded {
				at = r.config.Gap - at
			}
			if at <= distance {
				sum += mean[j] * dx * r.config.Area(float64(j))
			}
		}
	}
	return sum
}

// CrossingPart returns the part of the electrons that crossed more than one cell in a step.
func (r *Recorder) CrossingPart() float64 {
	var seen, crossing int64
	for c := range r.species[0].chunks {
		n := r.species[0].chunks[c].moves
		seen, crossing = seen+n[0], crossing+n[1]
	}
	return float64(crossing) / math.Max(1, float64(seen))
}
