package diagnostics

import (
	"ionfall/internal/stats"
)

// averages holds what the finished batches gave.
type averages struct {
	phases   []*stats.Vector // by grid quantity: phase x nodes
	profiles []*stats.Vector // by grid quantity: nodes
	circuit  []*stats.Vector // voltage, current, mid-gap, then the sheaths: by phase
	spectra  [][2]*stats.Vector
	angles   [][2]*stats.Vector
	eepf     []*stats.Vector // by region
	sheath   [2][]float64    // time average by batch [m]
	// central values by period
	centerDensity, centerEnergy []float64 // electrons [1/m3], their energy density [eV/m3]
	midGap                      []float64 // [V]
	seen                        centerSums
}

// centerSums is how much of the running batch's sums earlier periods account for.
type centerSums struct {
	density, energy, midGap float64
	samples, steps          float64
}

const (
	circuitSheath = circuitRows // two rows, by wall
	circuitAll    = circuitRows + 2
)

func newAverages(r *Recorder) averages {
	nodes := r.config.Cells + 1
	var a averages
	for range r.grid {
		a.phases = append(a.phases, stats.NewVector(r.phases*nodes))
		a.profiles = append(a.profiles, stats.NewVector(nodes))
	}
	for range circuitAll {
		a.circuit = append(a.circuit, stats.NewVector(r.phases))
	}
	for _, rec := range r.species {
		var spectra, angles [2]*stats.Vector
		for wall, im := range rec.impacts {
			if im != nil {
				spectra[wall] = stats.NewVector(len(im.spectrum))
				angles[wall] = stats.NewVector(len(im.angles))
			}
		}
		a.spectra, a.angles = append(a.spectra, spectra), append(a.angles, angles)
	}
	for range r.regions {
		a.eepf = append(a.eepf, stats.NewVector(r.eBins.count()))
	}
	return a
}

// EndPeriod closes an RF period whose particles had the given weight [1/m2]; when a batch is
// full, it goes into the averages.
func (r *Recorder) EndPeriod(weight float64) {
	if !r.on {
		return
	}
	for _, rec := range r.species {
		rec.flush(&r.config, weight)
	}
	r.flushIonization(weight)
	r.centralValues()
	r.periods++
	if r.periods >= r.batch {
		r.closeBatch()
	}
}

// flushIonization adds the counted ionizations to the grid [1/m3].
func (r *Recorder) flushIonization(weight float64) {
	nodes := r.config.Cells + 1
	sum := r.grid[gridIonization]
	for _, rec := range r.species {
		for c := range rec.chunks {
			counts := rec.chunks[c].ionized
			for i, n := range counts {
				if n == 0 {
					continue
				}
				sum[i] += weight / r.volume[i%nodes] * float64(n)
				counts[i] = 0
			}
		}
	}
}

// centralNodes returns the nodes whose averages are called central.
func (r *Recorder) centralNodes() (from, to int) {
	cells := r.config.Cells
	reach := int(0.5 * centerPart * float64(cells))
	return cells/2 - reach, (cells+1)/2 + reach + 1
}

// centralValues appends this period's part of the central sums to the series.
func (r *Recorder) centralValues() {
	nodes := r.config.Cells + 1
	from, to := r.centralNodes()
	var now centerSums
	density := r.grid[gridFixed+gridDensity]
	energy := r.grid[gridFixed+gridEnergy]
	for p := range r.phases {
		for j := from; j < to; j++ {
			now.density += density[p*nodes+j]
			now.energy += energy[p*nodes+j]
		}
		now.midGap += r.circuit[circuitMidGap][p]
		now.samples += float64(r.samples[p])
		now.steps += float64(r.steps[p])
	}
	a := &r.averages
	was := a.seen
	number := (now.samples - was.samples) * float64(to-from)
	a.centerDensity = append(a.centerDensity, (now.density-was.density)/number)
	a.centerEnergy = append(a.centerEnergy, (now.energy-was.energy)/number)
	a.midGap = append(a.midGap, (now.midGap-was.midGap)/(now.steps-was.steps))
	a.seen = now
}

// closeBatch turns the running sums into one batch of every average and clears them.
func (r *Recorder) closeBatch() {
	duration := float64(r.periods) * r.config.Period
	r.batchGrid(duration)
	r.batchCircuit()
	r.batchImpacts(duration)
	r.batchElectrons()
	clear(r.samples)
	clear(r.steps)
	for _, sums := range r.grid {
		clear(sums)
	}
	for q := range r.circuit {
		clear(r.circuit[q])
	}
	r.averages.seen = centerSums{}
	r.periods = 0
}

func (r *Recorder) batchGrid(duration float64) {
	nodes := r.config.Cells + 1
	total := 0.0
	for _, n := range r.samples {
		total += float64(n)
	}
	for q, sums := range r.grid {
		profile := make([]float64, nodes)
		for p := range r.phases {
			row := sums[p*nodes : (p+1)*nodes]
			per, whole := 1/float64(r.samples[p]), 1/total
			if q == gridIonization {
				whole = 1 / duration
				per = float64(r.config.StepsPerPeriod) / (duration * float64(r.stepsIn(p)))
			}
			for j := range row {
				profile[j] += row[j] * whole
				row[j] *= per
			}
		}
		r.averages.phases[q].Add(sums)
		if q >= gridFixed && (q-gridFixed)%gridPerSpecies == gridEnergy {
			continue // the profile is that of the temperature, below
		}
		r.averages.profiles[q].Add(profile)
	}
	r.batchTemperature()
}

// batchTemperature adds the profiles of two thirds of the mean energy [eV]. The grid's sums have
// been turned into phase averages by now.
func (r *Recorder) batchTemperature() {
	nodes := r.config.Cells + 1
	for i := range r.species {
		first := gridFixed + gridPerSpecies*i
		profile := make([]float64, nodes)
		for j := range profile {
			var number, energy float64
			for p := range r.phases {
				w := float64(r.stepsIn(p))
				number += w * r.grid[first+gridDensity][p*nodes+j]
				energy += w * r.grid[first+gridEnergy][p*nodes+j]
			}
			if number > 0 {
				profile[j] = 2.0 / 3 * energy / number
			}
		}
		r.averages.profiles[first+gridEnergy].Add(profile)
	}
}

// stepsIn returns how many steps of a period belong to phase bin p.
func (r *Recorder) stepsIn(p int) int {
	n, steps := r.phases, r.config.StepsPerPeriod
	return ((p+1)*steps+n-1)/n - (p*steps+n-1)/n
}

func (r *Recorder) batchCircuit() {
	for q := range r.circuit {
		row := make([]float64, r.phases)
		for p := range row {
			row[p] = r.circuit[q][p] / float64(r.steps[p])
		}
		r.averages.circuit[q].Add(row)
	}
	for wall := range 2 {
		row := make([]float64, r.phases)
		mean := 0.0
		for p := range row {
			row[p] = r.sheathAt(p, wall)
			mean += row[p] * float64(r.stepsIn(p)) / float64(r.config.StepsPerPeriod)
		}
		r.averages.circuit[circuitSheath+wall].Add(row)
		r.averages.sheath[wall] = append(r.averages.sheath[wall], mean)
	}
}

func (r *Recorder) batchImpacts(duration float64) {
	for i, rec := range r.species {
		for wall, im := range rec.impacts {
			if im == nil {
				continue
			}
			for k := range im.spectrum {
				im.spectrum[k] /= duration
			}
			for k := range im.angles {
				im.angles[k] /= duration
			}
			r.averages.spectra[i][wall].Add(im.spectrum)
			r.averages.angles[i][wall].Add(im.angles)
			im.spectra = append(im.spectra, append([]float64(nil), im.spectrum...))
			clear(im.spectrum)
			clear(im.angles)
		}
	}
}

// batchElectrons adds the EEPF of every region: the electrons in a bin, as part of all, over the
// bin's integral of sqrt(E).
func (r *Recorder) batchElectrons() {
	n := r.eBins.count()
	counts := make([]int64, len(r.regions)*n)
	for _, rec := range r.species {
		for c := range rec.chunks {
			zones := rec.chunks[c].electrons.Counts
			for k, number := range zones {
				for g := range r.regions {
					if z := k / n; z >= r.regions[g].firstZone && z <= r.regions[g].lastZone {
						counts[g*n+k%n] += number
					}
				}
			}
			clear(zones)
		}
	}
	for g := range r.regions {
		row := make([]float64, n)
		total := int64(0)
		for _, number := range counts[g*n : (g+1)*n] {
			total += number
		}
		for k := range row {
			if total > 0 {
				row[k] = float64(counts[g*n+k]) / float64(total) /
					rootIntegral(r.eBins.edges[k], r.eBins.edges[k+1])
			}
		}
		r.averages.eepf[g].Add(row)
	}
}
