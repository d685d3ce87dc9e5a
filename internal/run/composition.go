package run

import (
	"math"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

// composition is what the ions of a start are made up of.
type composition struct {
	positive []float64 // parts of the positive ions, in the order of the species
	negative []float64 // over the electrons
}

const (
	// startLife is about how long ions stay in a discharge of some centimetres [s].
	startLife = 20e-6
	// startEnergy is about the energy of relative motion in the bulk [eV].
	startEnergy = 0.05
	// mostNegative bounds the negative ions of a start, over the electrons.
	mostNegative = 3.0
)

// composition estimates the ions from production by electrons of the temperature [eV] and density
// [1/m3], reactions
// with the gas, and a life until the walls: N_i (1/life + sum_j nu_ij) = S_i + sum_j N_j nu_ji.
func (p *Plan) composition(te, density float64) composition {
	index := map[string]int{}
	for i, h := range p.heavy {
		index[h.Name] = i
	}
	source := make([]float64, len(p.heavy))
	for i, g := range p.Gases {
		density := p.gasDensity() * p.Case.Gas.Mixture[i].Fraction
		for k := range g.Electron {
			q := &g.Electron[k]
			for _, out := range q.Out {
				if j, ok := index[out.Name]; ok && out.Charge != 0 {
					source[j] += density * maxwellRate(&q.Table, te)
				}
			}
		}
	}
	flow := p.conversions(index)
	n := make([]float64, len(p.heavy))
	for range 200 {
		next := make([]float64, len(n))
		for i := range n {
			next[i] = source[i]
			out := 1 / startLife
			for j := range n {
				next[i] += n[j] * flow[j][i]
				out += flow[i][j]
			}
			next[i] /= out
		}
		n = next
	}
	return p.parts(n, p.negativeStart(te, density))
}

// conversions are the frequencies at which one species becomes another [1/s].
func (p *Plan) conversions(index map[string]int) [][]float64 {
	flow := make([][]float64, len(p.heavy))
	for i, h := range p.heavy {
		flow[i] = make([]float64, len(p.heavy))
		if h.Charge == 0 {
			continue
		}
		for _, b := range p.backgrounds() {
			mu := h.Mass * b.Gas.Mass / (h.Mass + b.Gas.Mass)
			speed := math.Sqrt(2 * startEnergy * phys.ElementaryCharge / mu)
			for _, q := range p.reactionsWith(h, b) {
				energy := startEnergy
				if q.Frame == crosssections.Lab {
					energy *= h.Mass / mu
				}
				for _, out := range q.Out {
					if j, ok := index[out.Name]; ok && out.Charge != 0 && j != i {
						flow[i][j] += b.Density * q.Table.At(energy) * speed
					}
				}
			}
		}
	}
	return flow
}

// parts are the densities as parts of the positive ions, and the negative ones, which are negative
// times the electrons in all.
func (p *Plan) parts(n []float64, negative float64) composition {
	var c composition
	sum, minus := 0.0, 0.0
	for i, h := range p.heavy {
		if h.Charge > 0 {
			sum += n[i]
		} else {
			minus += n[i]
		}
	}
	for i, h := range p.heavy {
		switch {
		case h.Charge > 0:
			part := 1.0
			if sum > 0 {
				part = n[i] / sum
			}
			c.positive = append(c.positive, part)
		case h.Charge < 0:
			part := 0.0
			if minus > 0 {
				part = negative * n[i] / minus
			}
			c.negative = append(c.negative, part)
		}
	}
	return c
}
