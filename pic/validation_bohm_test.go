package pic

import (
	"fmt"
	"math"
	"testing"

	"ionfall/internal/phys"
	"ionfall/internal/validation"
)

// bohmPerCell is the number of particles in a cell at the nominal density.
const bohmPerCell = 200

// bohmPlasma is a plasma between an isolated and a grounded wall, collisionless but for what
// keeps the electrons Maxwellian; ions start at rest.
type bohmPlasma struct {
	plasma  sustained
	config  Config
	center  float64 // mean ion density in mid-gap [1/m3]
	rise    float64 // mean potential of mid-gap against the isolated wall [V]
	square  float64 // mean of its square
	samples float64
	on      bool
}

func newBohmPlasma(scheme Scheme, ratio float64) *bohmPlasma {
	const density, te, lengths, cells, phase, every = 1e15, 3.0, 120, 240, 0.2, 16
	b := &bohmPlasma{plasma: sustained{
		electron: te, rate: 0.1 * plasmaFrequency(density), from: 0.2, to: 0.8, everyone: true,
	}}
	ion := Species{Name: "X+", Charge: 1, Mass: ratio * phys.ElectronMass, Every: every}
	b.config = Config{
		Gap: lengths * debyeLength(density, te), Cells: cells, StepsPerPeriod: every,
		Period: every * phase / plasmaFrequency(density), Scheme: scheme, Isolated: true,
		Chunks: 2, Seed: 11, Species: []Species{electrons(), ion},
	}
	b.config.Weight = density * b.config.CellSize() / bohmPerCell
	return b
}

// run settles for the first number of ion flights from the middle to the wall at sound speed,
// and averages over the second.
func (b *bohmPlasma) run(t *testing.T, settle, count float64) (flux float64) {
	t.Helper()
	s := mustNew(t, b.config)
	b.plasma.load(t, s, b.config.Cells*bohmPerCell/2)
	s.SetWorkers(1)
	const near = 5 // cells on either side of mid-gap
	mid := b.config.Cells / 2
	watch(s, &spy{
		due: func(n int64) bool { return b.on && n%4 == 0 },
		reduce: func(f *Frame, _, _ int) {
			b.samples++
			rise := f.Phi[mid] - f.Phi[0]
			b.rise += rise
			b.square += rise * rise
			for j := mid - near; j <= mid+near; j++ {
				b.center += f.Number[1][j] * f.Weight / b.config.CellSize() / (2*near + 1)
			}
		},
		hits: func(i, _ int, hits []Hit) {
			if i == 1 {
				b.plasma.count(hits)
			}
		},
	})
	sound := math.Sqrt(b.plasma.electron * phys.ElementaryCharge / b.config.Species[1].Mass)
	flight := b.config.Gap / 2 / sound / b.config.TimeStep()
	for float64(s.step) < settle*flight {
		b.plasma.step(t, s)
	}
	b.on, b.plasma.total = true, [2]float64{}
	begin := s.step
	for float64(s.step) < (settle+count)*flight {
		b.plasma.step(t, s)
	}
	b.center, b.rise = b.center/b.samples, b.rise/b.samples
	arrived := b.plasma.total[0] + b.plasma.total[1]
	seconds := float64(s.step-begin) * b.config.TimeStep()
	spread := math.Sqrt(b.square/b.samples-b.rise*b.rise) / b.plasma.electron
	t.Logf("%g ions arrived, %v; potential fluctuates by %.2f Te", arrived, b.plasma.total, spread)
	return arrived / 2 * b.config.Weight / seconds
}

// Goal: a plasma loses ions at the speed of kinetic theory, and stands above an isolated wall
// by what repels as many electrons. Method: ions born at rest all over the middle 0.6 of a gap of
// 120 Debye lengths, electrons kept Maxwellian.
//
// Theory of a collisionless plasma with Boltzmann electrons, Debye length zero, whatever the
// place of the source: the flux to a wall is 0.4871 n0 sqrt(Te/M) with n0 the density in the
// middle, where the potential is 0.854 Te above the sheath's edge. The electron flux
// n0 sqrt(Te/(2 pi m)) exp(-eta) is the same: eta = ln sqrt(M/(2 pi m)) - ln 0.4871. (The
// textbook's ln sqrt(M/(2 pi m)) + 1/2 takes ions that fall through Te/2 all alike, 0.61 n0.)
//
// Deviations that are no error of the program: new velocities at the rate nu are a friction that
// lowers the wall by m nu times the integral of the flow velocity, 0.03 Te; electrons fast enough
// are made anew within 3 v_t/nu = 30 Debye lengths, so that exp(-4) = 2 % of them lack, which
// lifts it by 0.02 Te: 0.05 Te are allowed.
// Plasma waves of particle noise, faster than electrons cross the sheath, move the potential by
// some tenths of Te and do not change its mean much; 400 particles a Debye length keep them small.
// The gap is not infinitely wider than the Debye length:
// by (lambda_D/L)^(4/5) = 3 %, the scale of the transition at the edge; 5 % are allowed.
//
// Refs: L. Tonks and I. Langmuir, Phys. Rev. 34, 876 (1929); E. R. Harrison and W. B. Thompson,
// Proc. Phys. Soc. 74, 145 (1959) (numbers from memory).
func TestValidationBohmFlux(t *testing.T) {
	onlyWhenValidating(t)
	const ratio, share = 4 * 1836.15, 0.4871
	for _, scheme := range schemes() {
		b := newBohmPlasma(scheme, ratio)
		flux := b.run(t, 6, 6)
		te := b.plasma.electron
		sound := math.Sqrt(te * phys.ElementaryCharge / b.config.Species[1].Mass)
		row := validation.Row{
			Section: "isolated wall of a plasma with a source", Status: "memory",
			Quantity: fmt.Sprintf("ion flux over n0 sqrt(Te/M), %v", scheme), Reference: share,
			Source: "L. Tonks and I. Langmuir, Phys. Rev. 34, 876 (1929); E. R. Harrison and " +
				"W. B. Thompson, Proc. Phys. Soc. 74, 145 (1959)",
			Ours: flux / (b.center * sound), Limit: 0.05, LimitKind: validation.Relative,
			Seed: b.config.Seed,
			Note: fmt.Sprintf("Te %g eV, M/m %.0f, gap 120 Debye lengths", te, ratio),
		}
		second := row
		second.Quantity = fmt.Sprintf("potential of the middle above the wall, %v", scheme)
		second.Unit, second.Ours = "Te", b.rise/te
		second.Reference = math.Log(math.Sqrt(ratio/(2*math.Pi)) / share)
		second.Limit, second.LimitKind = 0.05, validation.Absolute
		record(t, row, second)
	}
}
