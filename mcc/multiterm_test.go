package mcc

import (
	"math"
	"testing"

	"ionfall/crosssections"
)

// multiTerm goes on from two terms: Legendre components f0 to f(terms-1) of the distribution,
// with l = 1 and above
//
//	E/N [l/(2l-1) (2E d/dE - l+1) f(l-1) + (l+1)/(2l+3) (2E d/dE + l+2) f(l+1)] + 2E Q fl = 0
//
// and f0 as in twoTerm, with the flux g/3 E/N E f1. Even components live in the middle of cells,
// odd ones at their upper edges. What comes down from inelastic collisions is that of the round
// before; rounds are repeated until nothing changes.
//
// Ref: L. C. Pitchford, S. V. O'Neil and J. R. Rumble, Phys. Rev. A 23, 294 (1981); R. E. Robson and
// K. F. Ness, Phys. Rev. A 33, 2068 (1986); from memory.
type multiTerm struct {
	twoTerm
	terms int
	bands [][]float64 // of the equations: row, column - row + reach
	right []float64
	upper []float64 // f1 at the upper edges
}

// reach is the largest distance of a coupled component in the list of all.
func (w *multiTerm) reach() int { return w.terms + 1 }

// solveMultiTerm solves for a gas in a field [Td] up to topEV; terms is even. The gas must have
// inelastic collisions.
func solveMultiTerm(t testing.TB, gas *crosssections.Gas, field, topEV float64, cells, terms int,
) twoTermResult {
	t.Helper()
	w := &multiTerm{twoTerm: newTwoTerm(gas, field, topEV, cells), terms: terms}
	w.upper = make([]float64, cells)
	w.right = make([]float64, cells*terms)
	last := twoTermResult{}
	gain := make([]float64, cells+1)
	gain[0] = 1 // in the first round all electrons come from the lowest cell
	for range 1000 {
		w.round(gain)
		r := w.moments()
		r.drift = w.driftOf()
		w.gainOf(gain)
		w.growth = r.ionization
		if math.Abs(r.meanEV/last.meanEV-1) < 1e-8 &&
			math.Abs(r.ionization-last.ionization) <= 1e-7*r.ionization {
			return r
		}
		last = r
	}
	t.Fatalf("%s, %g Td: the solution of %d terms does not settle", gas.Name, field, terms)
	return last
}

// gainOf fills in what collisions give to the cells, for one electron in all.
func (w *multiTerm) gainOf(gain []float64) {
	clear(gain)
	number := 0.0
	for i := range w.f {
		number += w.f[i] * w.volume(i)
	}
	for i := range w.f {
		w.f[i] /= number
		w.upper[i] /= number
		w.n[i] = w.f[i] * w.volume(i)
	}
	for i := range w.f {
		w.scatter(i, gain)
	}
}

func (w *multiTerm) driftOf() float64 {
	number, drift := 0.0, 0.0
	for i := range w.f {
		number += w.n[i]
		edge := w.width * float64(i+1)
		drift += w.gamma / 3 * edge * w.upper[i] * w.width
	}
	return drift / number
}

// round solves the equations of all components with the given gain.
func (w *multiTerm) round(gain []float64) {
	cells, reach := len(w.f), w.reach()
	w.bands = make([][]float64, cells*w.terms)
	for row := range w.bands {
		w.bands[row] = make([]float64, 2*reach+1)
	}
	for i := range cells {
		w.right[i*w.terms] = gain[i]
		w.balance(i)
		for l := 1; l < w.terms; l++ {
			w.right[i*w.terms+l] = 0
			w.component(i, l)
		}
	}
	eliminate(w.bands, w.right, reach)
	for i := range cells {
		w.f[i], w.upper[i] = w.right[i*w.terms], w.right[i*w.terms+1]
		w.n[i] = w.f[i] * w.volume(i)
	}
}

// add puts a coefficient of component l of cell j into the equation of component k of cell i.
func (w *multiTerm) add(i, k, j, l int, value float64) {
	if j < 0 || j >= len(w.f) || l >= w.terms {
		return
	}
	row, column := i*w.terms+k, j*w.terms+l
	w.bands[row][column-row+w.reach()] += value
}

// balance is the equation of f0 in cell i.
func (w *multiTerm) balance(i int) {
	loss := w.growth * w.volume(i)
	for k, p := range w.channels {
		if p.Kind != crosssections.Elastic {
			loss += w.gamma * w.strength[k][i] * w.width
		}
	}
	w.add(i, 0, i, 0, loss)
	for _, side := range []int{0, 1} { // the lower edge, the upper one
		edge, sign := w.width*float64(i+side), float64(2*side-1)
		if edge == 0 || i+side == len(w.f) {
			continue
		}
		_, recoil := w.mobility(edge)
		w.add(i, 0, i+side-1, 1, sign*w.gamma/3*w.field*edge)
		cooling := w.gamma * 2 * w.ratio * recoil * edge * edge
		w.add(i, 0, i+side-1, 0, -sign*cooling/2)
		w.add(i, 0, i+side, 0, -sign*cooling/2)
	}
}

// component is the equation of fl, in the middle of cell i or, odd, at its upper edge.
func (w *multiTerm) component(i, l int) {
	at, below := w.width*(float64(i)+0.5), i-1 // index of the neighbours at lower energy
	if l%2 == 1 {
		at, below = w.width*float64(i+1), i
	}
	if l%2 == 1 && i == len(w.f)-1 {
		w.add(i, l, i, l, 1) // nothing leaves at the top
		return
	}
	perQ, _ := w.mobility(at)
	w.add(i, l, i, l, 2*at*at/perQ)
	x := float64(l)
	step, from := 2*at/w.width, x/(2*x-1)*w.field
	w.add(i, l, below, l-1, from*(-step-(x-1)/2))
	w.add(i, l, below+1, l-1, from*(step-(x-1)/2))
	from = (x + 1) / (2*x + 3) * w.field
	w.add(i, l, below, l+1, from*(-step+(x+2)/2))
	w.add(i, l, below+1, l+1, from*(step+(x+2)/2))
}

// eliminate solves a banded system in place; the diagonal dominates, so that no rows are swapped.
func eliminate(bands [][]float64, right []float64, reach int) {
	n := len(bands)
	for k := range n {
		for row := k + 1; row <= min(n-1, k+reach); row++ {
			part := bands[row][k-row+reach] / bands[k][reach]
			if part == 0 {
				continue
			}
			for column := k; column <= min(n-1, k+reach); column++ {
				bands[row][column-row+reach] -= part * bands[k][column-k+reach]
			}
			right[row] -= part * right[k]
		}
	}
	for k := n - 1; k >= 0; k-- {
		for column := k + 1; column <= min(n-1, k+reach); column++ {
			right[k] -= bands[k][column-k+reach] * right[column]
		}
		right[k] /= bands[k][reach]
	}
}
