package pic

import (
	"fmt"
	"runtime"
	"sync"
	"testing"
)

// BenchmarkPoisson is one tridiagonal solve.
func BenchmarkPoisson(b *testing.B) {
	for _, cells := range []int{128, 512} {
		b.Run(fmt.Sprintf("%dcells", cells), func(b *testing.B) {
			p := newPoisson(&Config{Cells: cells})
			rhs, phi := make([]float64, cells+1), make([]float64, cells+1)
			for j := range rhs {
				rhs[j] = float64(j%7) - 3
			}
			for b.Loop() {
				p.solve(rhs, phi)
			}
		})
	}
}

// BenchmarkBarrier is one meeting of two workers that have nothing else to do, threads as in
// Advance.
func BenchmarkBarrier(b *testing.B) {
	bar := newBarrier(2)
	var group sync.WaitGroup
	n := b.N
	for w := range 2 {
		group.Go(func() {
			runtime.LockOSThread()
			defer runtime.UnlockOSThread()
			for range n {
				bar.wait(w)
			}
		})
	}
	group.Wait()
}
