package diagnostics

import "math"

// rootIntegral returns the integral of sqrt(E) from a to b.
func rootIntegral(a, b float64) float64 {
	return 2.0 / 3 * (b*math.Sqrt(b) - a*math.Sqrt(a))
}

// sheathAt returns the width of the sheath at a wall [m] in phase bin p of the running batch,
// whose grid sums have been turned into averages.
func (r *Recorder) sheathAt(p, wall int) float64 {
	nodes := r.config.Cells + 1
	half := nodes/2 + 1
	electrons, positive := make([]float64, half), make([]float64, half)
	for j := range half {
		at := p*nodes + j
		if wall == 1 {
			at = p*nodes + nodes - 1 - j
		}
		for i, rec := range r.species {
			density := r.grid[gridFixed+gridPerSpecies*i+gridDensity][at] *
				r.config.Area(float64(at-p*nodes))
			if i == 0 && rec.charge < 0 {
				electrons[j] = density
			} else {
				positive[j] += float64(rec.charge) * density
			}
		}
	}
	return r.config.CellSize() * ElectronEdge(electrons, positive)
}

// ElectronEdge returns the position s of the electron edge of a sheath, in node spacings from
// the wall at node 0: the electrons between wall and s are as many as the positive charges in
// excess between s and the last node, which must lie in the quasi-neutral plasma:
//
//	integral_0^s n_e dx = integral_s^end (n_+ - n_e) dx
//
// n_+ is the net density of all other charges (negative ions counted negative). Densities are
// linear between nodes.
//
// Ref: R. P. Brinkmann, J. Appl. Phys. 102, 093303 (2007).
func ElectronEdge(electrons, positive []float64) float64 {
	// The difference of both sides grows with s at the rate n_+; at s = 0 it is minus the
	// whole excess.
	missing := 0.0
	for j := 1; j < len(electrons); j++ {
		missing += 0.5 * (positive[j-1] - electrons[j-1] + positive[j] - electrons[j])
	}
	if missing <= 0 {
		return 0
	}
	for j := 1; j < len(positive); j++ {
		a, b := positive[j-1], positive[j]
		if cell := 0.5 * (a + b); missing > cell {
			missing -= cell
			continue
		}
		// a u + (b-a) u^2/2 = missing
		root := math.Sqrt(math.Max(0, a*a+2*(b-a)*missing))
		return float64(j-1) + 2*missing/(a+root)
	}
	return float64(len(positive) - 1)
}
