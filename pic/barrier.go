package pic

import (
	"runtime"
	"sync/atomic"
)

// spins is how often a waiting worker polls before it offers its processor to others: some 100
// us, as long as a step of a large run. Giving up earlier costs two wake-ups a step: with 4000
// polls two workers gained 1.3 over one, with this 1.6. Where the other processor is not free,
// the caller does better with fewer workers.
const spins = 100_000

// barrier lets workers wait for each other at the end of every step: 0.1 us instead of the
// 10 us of a sleeping wait. A worker raises its own flag and polls the others'.
type barrier struct {
	flags []flag
}

// flag fills two cache lines, so that raising it does not disturb the others' polling.
type flag struct {
	generation atomic.Uint64
	_          [120]byte
}

func newBarrier(workers int) *barrier { return &barrier{make([]flag, workers)} }

// wait returns when every worker has called it as often as worker w.
func (b *barrier) wait(w int) {
	mine := b.flags[w].generation.Add(1)
	for i := range b.flags {
		for n := 0; b.flags[i].generation.Load() < mine; n++ {
			if n >= spins {
				runtime.Gosched()
			}
		}
	}
}
