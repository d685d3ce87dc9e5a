package pic

import "testing"

// BenchmarkAdvance measures whole steps of a helium discharge: fields, push, walls, collisions,
// one worker. The number of particles hardly changes in the time of the measurement.
func BenchmarkAdvance(b *testing.B) {
	for _, c := range []struct {
		name  string
		inert bool
		every int
	}{{"He", false, 1}, {"He K 8", false, 8}, {"without collisions", true, 1}} {
		b.Run(c.name, func(b *testing.B) {
			d := discharge{
				gas: "He", pressure: 30, voltage: 200, density: 1e15, particles: 50_000,
				cells: 128, steps: 800, every: c.every, chunks: 16, seed: 1,
				scheme: EnergyConserving, inert: c.inert, plain: true,
			}
			s := d.build(b)
			mustAdvance(b, s, 800)
			s.TakeLedger()
			for b.Loop() {
				mustAdvance(b, s, 8)
			}
			moved := float64(s.TakeLedger().Moved)
			b.ReportMetric(b.Elapsed().Seconds()*1e9/moved, "ns/move")
			b.ReportMetric(moved/b.Elapsed().Seconds()/1e6, "Mmoves/s")
		})
	}
}
