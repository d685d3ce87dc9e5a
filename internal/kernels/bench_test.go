package kernels

import (
	"fmt"
	"math/rand/v2"
	"testing"
)

// BenchmarkPushDeposit measures every set on particles that cross a quarter of a cell a step. Those
// that leave are put back, which is part of the time. 2048 particles are a usual chunk.
func BenchmarkPushDeposit(b *testing.B) {
	for _, name := range Available() {
		s, err := Select(name)
		if err != nil {
			b.Fatal(err)
		}
		for _, c := range []struct{ cells, n int }{
			{128, 2048}, {128, 30_000}, {128, 130_000}, {512, 130_000}, {128, 1_000_000},
		} {
			b.Run(fmt.Sprintf("%s/%dx%d", name, c.cells, c.n), func(b *testing.B) {
				benchmarkPush(b, s, c.cells, c.n)
			})
		}
	}
}

func benchmarkPush(b *testing.B, s Set, cells, n int) {
	r := rand.New(rand.NewPCG(5, 6))
	x, v, field := particles(r, n, cells)
	for i := range v {
		v[i] *= 0.25 / 0.3
	}
	for j := range field {
		field[j] = Field{1e-3 * field[j].A, 1e-3 * field[j].D}
	}
	acc, out := make([]uint64, cells), make([]int32, n)
	for b.Loop() {
		clear(acc)
		for _, i := range out[:s.PushDeposit(x, v, field, acc, out)] {
			x[i] = float64(cells) * r.Float64()
		}
	}
	b.ReportMetric(float64(n)*float64(b.N)/b.Elapsed().Seconds()/1e6, "Mparticles/s")
}
