package main

import (
	"ionfall/internal/stats"
	"ionfall/pic"
)

// densities averages the density profiles over periods; a pic.Observer.
type densities struct {
	from  int64 // first step that counts
	steps int64 // of a period
	cells int
	dx    float64
	sum   [][]float64 // of the running period, by species
	total [][]float64 // of closed periods
	mid   []float64   // ion density in mid-plane, by period
}

func newDensities(c pic.Config, from int64) *densities {
	d := &densities{
		from: from, steps: int64(c.StepsPerPeriod), cells: c.Cells, dx: c.CellSize(),
	}
	for range c.Species {
		d.sum = append(d.sum, make([]float64, c.Cells+1))
		d.total = append(d.total, make([]float64, c.Cells+1))
	}
	return d
}

// Due implements pic.Observer.
func (d *densities) Due(n int64) bool { return n >= d.from }

// Particles implements pic.Observer.
func (d *densities) Particles(*pic.Frame, int, int, pic.Particles) {}

// Reduce implements pic.Observer: each worker adds up a range of nodes.
func (d *densities) Reduce(f *pic.Frame, worker, workers int) {
	nodes := d.cells + 1
	for i, number := range f.Number {
		for j := worker * nodes / workers; j < (worker+1)*nodes/workers; j++ {
			perVolume := f.Weight / d.dx
			if j == 0 || j == d.cells {
				perVolume *= 2
			}
			d.sum[i][j] += perVolume * number[j]
		}
	}
}

// Hits implements pic.Observer.
func (d *densities) Hits(int, int, []pic.Hit) {}

// Events implements pic.Observer.
func (d *densities) Events(int64, int, int, []float64, []pic.Event) {}

// Step implements pic.Observer.
func (d *densities) Step(pic.Circuit) {}

// endPeriod closes a period that counted.
func (d *densities) endPeriod() {
	for i := range d.sum {
		for j, x := range d.sum[i] {
			d.total[i][j] += x / float64(d.steps)
		}
		if i == 1 {
			d.mid = append(d.mid, d.sum[i][d.cells/2]/float64(d.steps))
		}
		clear(d.sum[i])
	}
}

// profile returns the average of a species at the nodes [1/m3].
func (d *densities) profile(species int) []float64 {
	p := make([]float64, d.cells+1)
	for j := range p {
		p[j] = d.total[species][j] / float64(len(d.mid))
	}
	return p
}

// midPlane returns the ion density in mid-plane [1/m3].
func (d *densities) midPlane() stats.Estimate { return stats.Mean(d.mid) }
