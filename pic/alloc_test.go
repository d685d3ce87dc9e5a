package pic

import (
	"runtime"
	"testing"
)

// allocations counts the heap objects that Advance makes.
func allocations(t *testing.T, s *Simulation, steps int) uint64 {
	t.Helper()
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	mustAdvance(t, s, steps)
	runtime.ReadMemStats(&after)
	return after.Mallocs - before.Mallocs
}

// Goal: a step allocates nothing. Method: a warm discharge with collisions, emission and an
// observer; Advance of 50 and of 500 steps make few objects alike (the workers' goroutines: 3 to
// 6 were seen), where one a chunk and step would make 14 000; the least of several tries, because
// the runtime has its own now and then.
func TestStepsAllocateNothing(t *testing.T) {
	for _, workers := range []int{1, 2} {
		s := smallDischarge().build(t)
		s.SetWorkers(workers)
		watch(s, &witness{every: 5})
		mustAdvance(t, s, 2000) // the plasma thins: no growth later
		few, many := uint64(1<<62), uint64(1<<62)
		for range 5 {
			few = min(few, allocations(t, s, 50))
			many = min(many, allocations(t, s, 500))
		}
		t.Logf("%d workers: %d objects in 50 steps, %d in 500", workers, few, many)
		if limit := uint64(8 + 6*workers); many > limit || few > limit {
			t.Errorf("%d workers: %d objects in 50 steps, %d in 500", workers, few, many)
		}
	}
}
