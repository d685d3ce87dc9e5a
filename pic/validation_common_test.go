package pic

import (
	cli "flag"
	"math"
	"math/bits"
	"testing"

	"ionfall/internal/kernels"
	"ionfall/internal/phys"
	"ionfall/internal/validation"

	"gonum.org/v1/gonum/stat/distuv"
)

var (
	validate = cli.Bool("validate", false, "run the long comparisons with published values, too")
	update   = cli.Bool("update", false, "keep the comparisons that were run as rows")
)

const (
	// plasmaRows holds the rows of these checks.
	plasmaRows = "../testdata/validation/plasma.json"
	// fourSigma is the limit of rows with a statistical error: one check in 16 000 fails by chance.
	fourSigma = 4
)

// record judges the rows and keeps them if asked.
func record(t *testing.T, rows ...validation.Row) {
	t.Helper()
	validation.Record(t, plasmaRows, *update, rows...)
}

// onlyWhenValidating skips a long check.
func onlyWhenValidating(t *testing.T) {
	t.Helper()
	if !*validate {
		t.Skip("takes long: give -validate")
	}
}

// plasmaFrequency returns omega_p [rad/s] of electrons of the density.
func plasmaFrequency(density float64) float64 {
	return phys.ElementaryCharge * math.Sqrt(density/(phys.Epsilon0*phys.ElectronMass))
}

// radicalInverse returns k's binary digits mirrored at the point: a sequence that fills 0..1
// evenly.
func radicalInverse(k int) float64 {
	return float64(bits.Reverse64(uint64(k))>>11) * 0x1p-53
}

// quietWave loads n electrons at equal distances, displaced by a cos-shaped density wave of
// relative amplitude a with one wavelength in the gap; velocities [cells/step] come from velocity.
func quietWave(s *Simulation, n int, a float64, velocity func(k int) float64) {
	cells := float64(s.config.Cells)
	k0 := 2 * math.Pi / cells
	for k := range n {
		x := (float64(k) + 0.5) / float64(n) * cells
		ch := &s.species[0].chunks[k%len(s.species[0].chunks)]
		ch.add(x-a/k0*math.Sin(k0*x), velocity(k), 0, 0)
	}
	s.SetWorkers(1)
}

// maxwellian returns quiet velocities of spread one, uncorrelated with the order of k.
func maxwellian(k int) float64 { return distuv.UnitNormal.Quantile(radicalInverse(k) + 0x1p-54) }

// fieldMode records the amplitude of E ~ sin(2 pi x/L) at every step.
func fieldMode(s *Simulation) *[]float64 {
	list := &[]float64{}
	watch(s, &spy{due: always, reduce: func(f *Frame, _, _ int) {
		sum := 0.0
		cells := float64(len(f.E) - 1)
		for j, e := range f.E {
			sum += e * math.Sin(2*math.Pi*float64(j)/cells)
		}
		*list = append(*list, 2*sum/cells)
	}})
	return list
}

// inject puts a particle into the running discharge, velocity in the species' unit.
func inject(s *Simulation, species, chunk int, x, vx, vy, vz float64) {
	ch := &s.species[species].chunks[chunk]
	ch.add(x, vx, vy, vz)
	kernels.Deposit(ch.x[len(ch.x)-1:], s.workers[chunk%len(s.workers)].deposit[s.step&1][species])
}

// line fits y = a + b x and returns b.
func slope(x, y []float64) float64 {
	var n, sx, sy, sxx, sxy float64
	for i := range x {
		n, sx, sy, sxx, sxy = n+1, sx+x[i], sy+y[i], sxx+x[i]*x[i], sxy+x[i]*y[i]
	}
	return (n*sxy - sx*sy) / (n*sxx - sx*sx)
}
