package mcc

import (
	"testing"

	"ionfall/internal/phys"
)

// BenchmarkCollide measures the cost of a candidate, null collisions included, for electrons of
// 3 eV and ions of 600 K at a candidate in ten particles, and the share that collides.
func BenchmarkCollide(b *testing.B) {
	for _, c := range []struct {
		gas, projectile string
		topEV, kelvin   float64
	}{
		{"He", "e", 1000, 2 * phys.ElementaryCharge / phys.Boltzmann},
		{"Ar", "e", 1000, 2 * phys.ElementaryCharge / phys.Boltzmann},
		{"He", "He+", 500, 600},
		{"Ar", "Ar+", 500, 600},
	} {
		b.Run(c.projectile+"/"+c.gas, func(b *testing.B) {
			gas := bundled(b, c.gas)
			mass := phys.ElectronMass
			if c.projectile != "e" {
				mass = gas.Gas.Mass
			}
			m := mustModel(b, c.projectile, mass, c.topEV, 0.1, gas)
			s := stream(500)
			vx, vy, vz := maxwellian(s, 100_000, c.kelvin, mass)
			ux, uy, uz := clone(vx), clone(vy), clone(vz)
			out := m.NewOutcome()
			for b.Loop() {
				b.StopTimer()
				copy(vx, ux)
				copy(vy, uy)
				copy(vz, uz)
				out.Births = out.Births[:0]
				b.StartTimer()
				m.Collide(s, vx, vy, vz, out)
			}
			real := int64(0)
			for _, n := range out.Counts {
				real += n
			}
			candidates := m.rate * float64(len(vx)) * float64(b.N)
			b.ReportMetric(b.Elapsed().Seconds()*1e9/candidates, "ns/candidate")
			b.ReportMetric(float64(real)/candidates, "real/candidate")
		})
	}
}

func clone(v []float64) []float64 { return append([]float64(nil), v...) }
