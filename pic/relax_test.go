package pic

import (
	"math"
	"testing"

	"ionfall/internal/rng"
	"ionfall/mcc"
)

// Goal: pairs are from the same cell or neighbours in order, each electron has one at most, and
// within a cell any other electron may be the partner. Method: 1001 electrons in 20 cells, sorted
// many times; each of 50 in a cell should meet each other equally often (chi-square).
func TestPairing(t *testing.T) {
	const cells, n = 20, 1001
	x := make([]float64, n)
	for i := range x {
		x[i] = float64(i%cells) + 0.3
	}
	var p pairing
	p.reserve(n, cells)
	met := make([]int, n) // by electron 0
	const rounds = 50_000
	s := rng.Key{Seed: 1, Purpose: rng.Coulomb}.Stream()
	for range rounds {
		order := p.sort(&s, x)
		seen := make([]bool, n)
		for i, k := range order {
			if seen[k] {
				t.Fatalf("electron %d stands twice in the order", k)
			}
			seen[k] = true
			if i > 0 && int(x[k]) < int(x[order[i-1]]) {
				t.Fatalf("cell %d after cell %d", int(x[k]), int(x[order[i-1]]))
			}
		}
		for i := 0; i+1 < n; i += 2 {
			a, b := order[i], order[i+1]
			if int(x[b])-int(x[a]) > 1 {
				t.Fatalf("a pair from cells %d and %d", int(x[a]), int(x[b]))
			}
			if a == 0 {
				met[b]++
			} else if b == 0 {
				met[a]++
			}
		}
	}
	// Cell 0 holds 51 electrons: 50 possible partners, and a neighbour's for the odd one out.
	partners, sum := 0, 0
	for k := cells; k < n; k += cells {
		partners++
		sum += met[k]
	}
	mean, chi2 := float64(sum)/float64(partners), 0.0
	for k := cells; k < n; k += cells {
		chi2 += (float64(met[k]) - mean) * (float64(met[k]) - mean) / mean
	}
	if limit := 50 + 6*math.Sqrt(2*50); partners != 50 || chi2 > limit {
		t.Errorf("%d partners, chi-square %.1f, want 50 and below %.1f", partners, chi2, limit)
	}
}

// Goal: electrons among themselves keep energy and momentum to rounding, and all take part. (The
// rate at which an anisotropy dies is tested in mcc.)
func TestRelaxKeepsEnergyAndMomentum(t *testing.T) {
	d := smallDischarge()
	d.inert, d.plain = true, true
	s := d.build(t)
	s.config.Relaxation = Relaxation{Pairs: mcc.NewCoulomb(10, s.config.VelocityUnit(1)), Every: 1}
	w := s.workers[0]
	s.sumCharge(w, 0)
	sums := func() (p [3]float64, e float64) {
		for c := range s.species[0].chunks {
			ch := &s.species[0].chunks[c]
			for i := range ch.vx {
				p[0] += ch.vx[i]
				p[1] += ch.vy[i]
				p[2] += ch.vz[i]
				e += ch.vx[i]*ch.vx[i] + ch.vy[i]*ch.vy[i] + ch.vz[i]*ch.vz[i]
			}
		}
		return p, e
	}
	p0, e0 := sums()
	was := append([]float64(nil), s.species[0].chunks[3].vx...)
	for c := range s.species[0].chunks {
		s.relax(w, c)
	}
	p1, e1 := sums()
	checkNear(t, "energy", e1/e0, 1, 1e-12)
	scale := math.Sqrt(e0 * float64(s.species[0].Count()))
	for k := range p0 {
		checkNear(t, "momentum", (p1[k]-p0[k])/scale, 0, 1e-12)
	}
	changed := 0
	for i, v := range s.species[0].chunks[3].vx {
		if v != was[i] {
			changed++
		}
	}
	if n := len(was); changed < n-1 {
		t.Errorf("%d of %d electrons changed their velocity", changed, n)
	}
}

// Goal: the density that pairs feel is that of the plasma. Method: a uniform plasma, in the middle
// and next to the walls.
func TestElectronDensityOfCells(t *testing.T) {
	d := smallDischarge()
	d.inert, d.plain, d.particles = true, true, 64*2000
	s := d.build(t)
	w := s.workers[0]
	s.sumCharge(w, 0)
	for _, cell := range []int{0, 1, 31, 63} {
		checkNear(t, "density over that loaded", s.electronDensity(w, cell)/d.density, 1, 0.01)
	}
}
