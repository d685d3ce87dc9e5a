package mcc

import (
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

// twoTerm is the two-term approximation of the Boltzmann equation of electrons in a uniform field:
// a deterministic solution that shares nothing with the swarm but the tables. The gas is cold,
// all scattering isotropic, ionization shares the excess energy equally, and the electrons grow
// in time as exp(nu t):
//
//	nu sqrt(E) f0 = d/dE [g/3 (E/N)^2 E/Q df0/dE + g 2m/M Qr E^2 f0]
//	              + g sum [(E+u) Qk(E+u) f0(E+u) - E Qk(E) f0(E)]
//
// with g = sqrt(2e/m), energies in eV, Q = sum Qk + nu/(g sqrt(E)), all per density of the gas;
// ionization gives 4 (2E+u) Qi(2E+u) f0(2E+u) back. Cells of equal width hold the number of
// electrons; the flux between two is that of D. L. Scharfetter and H. K. Gummel, IEEE Trans.
// Electron Devices 16, 64 (1969). Only the flux leads upwards, so that the cells follow from the
// uppermost one by one.
//
// Ref: T. Holstein, Phys. Rev. 70, 367 (1946); B. Sherman, J. Math. Anal. Appl. 1, 342 (1960) (the
// order of the cells); S. D. Rockwood, Phys. Rev. A 8, 2348 (1973) (the cells); from memory.
type twoTerm struct {
	field float64 // E/N [V m2]
	width float64 // of a cell [eV]
	ratio float64 // m/M
	gamma float64 // speed over the square root of the energy [m/s/eV^(1/2)]
	// Of each channel, E Qk averaged over each cell [eV m2].
	channels []*crosssections.Process
	strength [][]float64
	growth   float64   // nu/N [m3/s]
	f        []float64 // f0 in the cells
	n        []float64 // number of electrons in them
}

// twoTermResult holds moments of the distribution, in SI units.
type twoTermResult struct{ meanEV, drift, ionization float64 }

// solveTwoTerm solves for a gas in a field [Td] up to topEV with so many cells.
func solveTwoTerm(t testing.TB, gas *crosssections.Gas, field, topEV float64, cells int,
) twoTermResult {
	t.Helper()
	w := newTwoTerm(gas, field, topEV, cells)
	for range 200 {
		w.descend()
		r := w.moments()
		change := math.Abs(r.ionization - w.growth)
		w.growth = r.ionization
		if change <= 1e-9*r.ionization {
			return r
		}
	}
	t.Fatalf("%s, %g Td: the growth of the two-term solution does not settle", gas.Name, field)
	return twoTermResult{}
}

func newTwoTerm(gas *crosssections.Gas, field, topEV float64, cells int) twoTerm {
	w := twoTerm{
		field: field * townsend, width: topEV / float64(cells), ratio: phys.ElectronMass / gas.Mass,
		gamma: math.Sqrt(2 * phys.ElementaryCharge / phys.ElectronMass),
		f:     make([]float64, cells), n: make([]float64, cells),
	}
	for i := range gas.Electron {
		p := &gas.Electron[i]
		w.channels = append(w.channels, p)
		w.strength = append(w.strength, w.averaged(&p.Table, cells))
	}
	return w
}

// averaged returns E Q(E) averaged over each cell, by the midpoints of 16 parts.
func (w *twoTerm) averaged(table *crosssections.Table, cells int) []float64 {
	const parts = 16
	list := make([]float64, cells)
	for i := range list {
		for k := range parts {
			e := w.width * (float64(i) + (float64(k)+0.5)/parts)
			list[i] += e * table.At(e) / parts
		}
	}
	return list
}

// volume is the integral of sqrt(E) over a cell.
func (w *twoTerm) volume(i int) float64 {
	return 2. / 3 * (math.Pow(w.width*float64(i+1), 1.5) - math.Pow(w.width*float64(i), 1.5))
}

// mobility returns E/Q [eV/m2] at an energy, and the cross section Qr [m2] of the losses to the motion
// of the gas, 2m/M E in an elastic collision and m/M (2E - u) in an isotropic one with a threshold.
func (w *twoTerm) mobility(energyEV float64) (perQ, recoil float64) {
	total := w.growth / (w.gamma * math.Sqrt(energyEV))
	for _, p := range w.channels {
		q := p.Table.At(energyEV)
		total += q
		if p.Kind != crosssections.Ionization {
			recoil += q * (1 - p.Threshold/(2*energyEV))
		}
	}
	return energyEV / total, recoil
}

// hugeTail is the ratio of f0 at which all is divided by it: it may fall by more than the range of
// the numbers.
const hugeTail = 1e100

// descend finds f0 from the uppermost cell down: the flux into a cell from below is what leaves it
// upwards, less what comes from higher cells, plus what collides, and what it grows by.
func (w *twoTerm) descend() {
	last := len(w.f) - 1
	gain := make([]float64, len(w.f))
	w.f[last] = 1 // only ratios count
	flux := 0.0
	for i := last; i >= 0; i-- {
		w.n[i] = w.f[i] * w.volume(i)
		flux += w.growth*w.n[i] - gain[i] + w.scatter(i, gain)
		if i == 0 {
			return // the flux is zero here if the growth is right
		}
		edge := w.width * float64(i)
		perQ, recoil := w.mobility(edge)
		diffusion := w.gamma / 3 * w.field * w.field * perQ
		fall := w.gamma * 2 * w.ratio * recoil * edge * edge / diffusion * w.width
		up, down := bernoulli(fall), bernoulli(-fall)
		w.f[i-1] = (flux*w.width/diffusion + w.f[i]*down) / up
		if w.f[i-1] > hugeTail {
			flux /= hugeTail
			for _, list := range [][]float64{w.f, w.n, gain} {
				for k := range list {
					list[k] /= hugeTail
				}
			}
		}
	}
}

// bernoulli is x/(exp(x) - 1).
func bernoulli(x float64) float64 {
	if math.Abs(x) < 1e-9 {
		return 1 - x/2
	}
	return x / math.Expm1(x)
}

// scatter returns the loss of cell i by inelastic collisions and adds what they give to the cells
// below, shared by two cells so that number and energy are kept.
func (w *twoTerm) scatter(i int, gain []float64) float64 {
	sum := 0.0
	for k, p := range w.channels {
		if p.Kind == crosssections.Elastic || w.strength[k][i] == 0 {
			continue
		}
		rate := w.gamma * w.strength[k][i] * w.f[i] * w.width
		sum += rate
		to, made := (float64(i)+0.5)-p.Threshold/w.width, rate
		if p.Kind == crosssections.Ionization {
			to, made = to/2, 2*rate
		}
		at := math.Max(0, to-0.5)
		below := int(at)
		part := at - float64(below)
		gain[below] += (1 - part) * made
		gain[below+1] += part * made
	}
	return sum
}

// moments integrates over the distribution.
func (w *twoTerm) moments() twoTermResult {
	var number, energy, drift, ionization float64
	for i, n := range w.n {
		number += n
		energy += n * w.width * (float64(i) + 0.5)
		for k, p := range w.channels {
			if p.Kind == crosssections.Ionization {
				ionization += w.gamma * w.strength[k][i] * w.f[i] * w.width
			}
		}
		if i > 0 {
			perQ, _ := w.mobility(w.width * float64(i))
			drift += w.gamma / 3 * w.field * perQ * (w.f[i-1] - w.f[i])
		}
	}
	return twoTermResult{
		meanEV: energy / number, drift: drift / number, ionization: ionization / number,
	}
}
