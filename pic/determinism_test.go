package pic

import (
	"bytes"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// fingerprint folds 64-bit patterns in order (FNV-1a).
type fingerprint uint64

func (h *fingerprint) add(list ...float64) {
	for _, x := range list {
		*h = (*h ^ fingerprint(math.Float64bits(x))) * 1099511628211
	}
}

// witness is an observer that folds all it sees, by chunk, so that no order among workers
// matters. Each worker of Reduce must be shown the same grid.
type witness struct {
	every   int64
	circuit fingerprint
	frames  [16]fingerprint // by worker
	chunks  [2][16]fingerprint
}

func (o *witness) Due(n int64) bool { return n%o.every == 0 }

func (o *witness) Particles(f *Frame, species, chunk int, p Particles) {
	h := &o.chunks[species][chunk]
	h.add(float64(f.Step), f.Weight)
	h.add(p.X...)
	h.add(p.VX...)
	h.add(p.VY...)
	h.add(p.VZ...)
}

func (o *witness) Reduce(f *Frame, worker, _ int) {
	h := &o.frames[worker]
	h.add(float64(f.Step), f.Weight)
	h.add(f.Phi...)
	h.add(f.E...)
	h.add(f.FieldA...)
	h.add(f.FieldD...)
	for _, n := range f.Number {
		h.add(n...)
	}
}

func (o *witness) Hits(species, chunk int, hits []Hit) {
	h := &o.chunks[species][chunk]
	for _, hit := range hits {
		h.add(float64(hit.Wall), hit.VX, hit.VY, hit.VZ)
	}
}

func (o *witness) Events(n int64, species, chunk int, x []float64, events []Event) {
	h := &o.chunks[species][chunk]
	for _, e := range events {
		h.add(float64(n), x[e.Particle], float64(e.Channel))
	}
}

func (o *witness) Step(c Circuit) {
	o.circuit.add(float64(c.Step), c.Voltage, c.Current, c.MidGap)
}

// sum folds what was seen; workers' views must be alike.
func (o *witness) sum(t *testing.T, workers int) fingerprint {
	t.Helper()
	for w := range workers {
		if o.frames[w] != o.frames[0] || o.frames[w] == 0 {
			t.Errorf("worker %d of %d saw another grid than worker 0", w, workers)
		}
	}
	h := o.circuit
	h.add(math.Float64frombits(uint64(o.frames[0])))
	for _, species := range o.chunks {
		for _, c := range species {
			h.add(math.Float64frombits(uint64(c)))
		}
	}
	return h
}

// Goal: the result is the same bits for any number of workers, and observers see the same without
// changing it. Method: a discharge with everything switched on; checkpoint bytes, which hold
// the whole state and the tallies, with 1, 2, 3 and 7 workers, watched and not.
func TestWorkersAndObserversDoNotMatter(t *testing.T) {
	for _, scheme := range schemes() {
		d := smallDischarge()
		d.scheme = scheme
		var state []byte
		var saw fingerprint
		for _, workers := range []int{1, 2, 3, 7} {
			for _, watched := range []bool{true, false} {
				s := d.build(t)
				s.SetWorkers(workers)
				o := &witness{every: 3}
				if watched {
					watch(s, o)
				}
				mustAdvance(t, s, 301)
				got := stateBytes(t, s)
				if state == nil {
					state, saw = got, o.sum(t, workers)
				}
				if !bytes.Equal(got, state) {
					t.Errorf("%v: %d workers, watched %v: another state", scheme, workers, watched)
				}
				if watched && o.sum(t, workers) != saw {
					t.Errorf("%v: %d workers: observers saw another run", scheme, workers)
				}
			}
		}
	}
}

// Goal: a run continues from a checkpoint as if it had not stopped, at any step and with any
// workers. Method: stops at random steps, most of them between moves of the sub-cycled ions;
// the state goes through checkpoint bytes into a new simulation with other workers each time;
// end state and ledger as of the straight run.
func TestRestoreContinuesTheRun(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, scheme := range schemes() {
		d := smallDischarge()
		d.scheme, d.every = scheme, 8
		straight := d.build(t)
		mustAdvance(t, straight, 400)
		want := stateBytes(t, straight)
		ledger := fmt.Sprintf("%+v", straight.TakeLedger())
		for range 4 {
			s := d.build(t)
			stops := ""
			for s.Step() < 400 {
				s.SetWorkers(1 + r.IntN(4))
				mustAdvance(t, s, int(min(1+r.Int64N(160), 400-s.Step())))
				stops += fmt.Sprintf(" %d", s.Step())
				file := stateBytes(t, s)
				s = d.build(t) // particles that Restore must replace
				s.SetWorkers(1 + r.IntN(4))
				if err := restore(t, s, file); err != nil {
					t.Fatal(err)
				}
				if again := stateBytes(t, s); !bytes.Equal(again, file) {
					t.Fatalf("%v: state of step %d changes by saving it again", scheme, s.Step())
				}
			}
			if !bytes.Equal(stateBytes(t, s), want) {
				t.Errorf("%v: another state after stops at%s", scheme, stops)
			}
			if got := fmt.Sprintf("%+v", s.TakeLedger()); got != ledger {
				t.Errorf("%v: ledger %s, want %s", scheme, got, ledger)
			}
		}
	}
}

// Goal: a segment's division into calls of Advance and the number of workers in each do not
// matter. Method: 240 steps at once, and in pieces with other workers.
func TestSegmentsDoNotMatter(t *testing.T) {
	d := smallDischarge()
	d.every = 8
	whole := d.build(t)
	mustAdvance(t, whole, 240)
	pieces := d.build(t)
	for k, workers := range []int{3, 1, 2, 7, 2, 1} {
		pieces.SetWorkers(workers)
		mustAdvance(t, pieces, []int{1, 2, 50, 87, 0, 100}[k])
	}
	if !bytes.Equal(stateBytes(t, whole), stateBytes(t, pieces)) {
		t.Error("another state in pieces")
	}
}

// Goal: other seeds give other runs; chunks decide the random numbers. Method: inequality.
func TestSeedsMatter(t *testing.T) {
	d := smallDischarge()
	a := d.build(t)
	d.seed++
	b := d.build(t)
	mustAdvance(t, a, 10)
	mustAdvance(t, b, 10)
	if bytes.Equal(stateBytes(t, a), stateBytes(t, b)) {
		t.Error("two seeds, one state")
	}
}
