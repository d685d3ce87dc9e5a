package kernels

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// guard is how many elements before and behind each slice must not be touched.
const guard = 16

// guarded is an input of PushDeposit whose slices lie between guards: not-a-number patterns, so
// that what is read from there shows in the results, and what is written there in the guards.
type guarded struct {
	x, v  []float64
	field []Field
	acc   []uint64
	out   []int32
}

// poison is a quiet not-a-number that no arithmetic makes.
const poison = 0x7FF8_DEAD_BEEF_0001

func newGuarded(n, cells int) *guarded {
	nan := math.Float64frombits(poison)
	return &guarded{
		x: slices.Repeat([]float64{nan}, n+2*guard), v: slices.Repeat([]float64{nan}, n+2*guard),
		field: slices.Repeat([]Field{{nan, nan}}, cells+2*guard),
		acc:   slices.Repeat([]uint64{poison}, cells+2*guard),
		out:   slices.Repeat([]int32{-7_654_321}, n+2*guard),
	}
}

func inner[T any](s []T) []T { return s[guard : len(s)-guard : len(s)-guard] }

func (g *guarded) clone() *guarded {
	return &guarded{
		slices.Clone(g.x), slices.Clone(g.v), slices.Clone(g.field),
		slices.Clone(g.acc), slices.Clone(g.out),
	}
}

func (g *guarded) push(s Set) int {
	return s.PushDeposit(inner(g.x), inner(g.v), inner(g.field), inner(g.acc), inner(g.out))
}

// compare runs the set and the portable definition on the same input: every bit must agree, of
// results and guards. Results that are no number need not be the same one.
func compare(t *testing.T, s Set, g *guarded) {
	t.Helper()
	want := g.clone()
	left, wantLeft := g.push(s), want.push(Set{PushDeposit: PushDeposit})
	where := fmt.Sprintf("%s, %d particles, %d cells", s.Name, len(g.x)-2*guard, len(g.acc)-2*guard)
	if left != wantLeft {
		t.Errorf("%s: %d left, want %d", where, left, wantLeft)
	}
	sameBits(t, where+": x", g.x, want.x)
	sameBits(t, where+": v", g.v, want.v)
	for j := range want.acc {
		if g.acc[j] != want.acc[j] {
			t.Errorf("%s: acc[%d] is %#x, want %#x", where, j-guard, g.acc[j], want.acc[j])
		}
	}
	for i := range want.out {
		if g.out[i] != want.out[i] {
			t.Errorf("%s: out[%d] is %d, want %d", where, i-guard, g.out[i], want.out[i])
		}
	}
	if t.Failed() {
		t.FailNow()
	}
}

func sameBits(t *testing.T, where string, got, want []float64) {
	t.Helper()
	for i := range want {
		a, b := math.Float64bits(got[i]), math.Float64bits(want[i])
		if a != b && (b == poison || got[i] == got[i] || want[i] == want[i]) {
			t.Errorf("%s[%d] is %v (%#x), want %v (%#x)", where, i-guard, got[i], a, want[i], b)
		}
	}
}

// generic fills the input with values of no pattern; a few per cent of the particles leave. The
// words hold anything, for sums are modulo 2^64.
func (g *guarded) generic(r *rand.Rand) *guarded {
	cells := len(g.field) - 2*guard
	for i := range inner(g.x) {
		inner(g.x)[i] = r.Float64() * (float64(cells) - 0x1p-20)
		inner(g.v)[i] = 0.3 * r.NormFloat64()
	}
	for j := range inner(g.field) {
		inner(g.field)[j] = Field{0.1 * r.NormFloat64(), 0.1 * r.NormFloat64()}
		inner(g.acc)[j] = r.Uint64()
	}
	return g
}

// twins runs a test for each set but the portable one.
func twins(t *testing.T, test func(t *testing.T, s Set)) {
	names := Available()
	if len(names) == 1 {
		t.Skip("this build and processor have the portable kernels only")
	}
	for _, name := range names[1:] {
		t.Run(name, func(t *testing.T) {
			s, err := Select(name)
			if err != nil {
				t.Fatal(err)
			}
			test(t, s)
		})
	}
}

var gridSizes = []int{2, 7, 64, 128, 300, 512, 1000}

// Goal: every form of the kernel is the portable one to the bit. Method: all lengths about the
// vector, the ring of waiting deposits and the block, with values of no pattern.
func TestTwinsAtEveryLength(t *testing.T) {
	lengths := []int{2040, 2047, 2048, 2049, 2056, 2063, 4103, 10_007}
	for n := range 64 + 2*8 + 9 {
		lengths = append(lengths, n)
	}
	twins(t, func(t *testing.T, s Set) {
		r := rand.New(rand.NewPCG(11, 12))
		for _, cells := range gridSizes {
			for _, n := range lengths {
				compare(t, s, newGuarded(n, cells).generic(r))
			}
		}
	})
}

// Goal: leaving particles are found in every lane, alone and together, in order. Method: one, two
// or all of them get a velocity out of the grid, among others that stay.
func TestTwinsLeaveAtEveryLane(t *testing.T) {
	twins(t, func(t *testing.T, s Set) {
		r := rand.New(rand.NewPCG(13, 14))
		for _, cells := range gridSizes {
			for a := range 35 {
				for b := a; b < 35; b += 3 {
					g := newGuarded(35, cells).generic(r)
					for i := range inner(g.v) {
						inner(g.x)[i] = 0.5 + 0.9*r.Float64()
						inner(g.v)[i] = 0.01 * r.NormFloat64()
					}
					for j := range inner(g.field) {
						inner(g.field)[j].A *= 0.01
						inner(g.field)[j].D *= 0.01
					}
					inner(g.v)[a], inner(g.v)[b] = -3.3, float64(cells)+0.1
					compare(t, s, g)
				}
			}
			g := newGuarded(2100, cells).generic(r)
			for i := range inner(g.v) {
				inner(g.v)[i] = float64(cells) * (3 - 6*float64(r.IntN(2)))
			}
			compare(t, s, g)
		}
	})
}

// Goal: the edges of cells and of the grid. Method: particles on nodes, at both walls, half a
// unit of the fixed point beside them and a hair more, that stay there or go to such a place or
// far away.
func TestTwinsAtEdges(t *testing.T) {
	hairs := []float64{0, 0x1p-23, 0x1p-24, 0x1.8p-24, 0x1p-25, 1e-9, 1e-15, 0x1p-1060}
	twins(t, func(t *testing.T, s Set) {
		r := rand.New(rand.NewPCG(15, 16))
		for _, cells := range gridSizes {
			place := func() float64 {
				x := float64(r.IntN(cells + 1))
				if r.IntN(3) == 0 { // a wall
					x = float64(cells * r.IntN(2))
				}
				return x + hairs[r.IntN(len(hairs))]*float64(1-2*r.IntN(2))
			}
			far := []float64{1e6, 0x1p28, 0x1p29, 0x1p31, 0x1p32, 1e300, math.Inf(1), math.NaN()}
			for range 200 {
				g := newGuarded(29, cells).generic(r)
				for j := range inner(g.field) {
					if r.IntN(4) > 0 {
						inner(g.field)[j] = Field{}
					}
				}
				for i := range inner(g.x) {
					x := place()
					for !Inside(x, cells) {
						x = place()
					}
					inner(g.x)[i], inner(g.v)[i] = x, place()-x
					if r.IntN(20) == 0 {
						inner(g.v)[i] = far[r.IntN(len(far))] * float64(1-2*r.IntN(2))
					}
				}
				compare(t, s, g)
			}
		}
	})
}

// Goal: deposits into one cell do not get lost. Method: all particles in the same cell, or in two.
func TestTwinsInOneCell(t *testing.T) {
	twins(t, func(t *testing.T, s Set) {
		r := rand.New(rand.NewPCG(17, 18))
		for _, cells := range gridSizes {
			for _, apart := range []int{0, 1} {
				g := newGuarded(777, cells).generic(r)
				clear(inner(g.field))
				for i := range inner(g.x) {
					inner(g.x)[i] = float64(cells-1-i%2*apart) + 0.1 + 0.5*r.Float64()
					inner(g.v)[i] = 0.1 * r.Float64()
				}
				compare(t, s, g)
			}
		}
	})
}

// Goal: the frames of the assembly fit stacks that must grow for them, and nothing is allocated.
// Method: calls on fresh, small stacks at many depths.
func TestTwinsOnSmallStacks(t *testing.T) {
	twins(t, func(t *testing.T, s Set) {
		r := rand.New(rand.NewPCG(19, 20))
		start := newGuarded(500, 64).generic(r)
		want := start.clone()
		want.push(Set{PushDeposit: PushDeposit})
		for depth := range 60 {
			g := start.clone()
			done := make(chan int)
			go func() { done <- dive(depth, func() int { return g.push(s) }) }()
			<-done
			if !slices.Equal(inner(g.x), inner(want.x)) || !slices.Equal(g.acc, want.acc) {
				t.Fatalf("depth %d: other results than the portable form", depth)
			}
		}
		g := start.clone()
		if n := testing.AllocsPerRun(10, func() { clear(inner(g.v)); g.push(s) }); n != 0 {
			t.Errorf("%v allocations a call, want none", n)
		}
	})
}

// dive calls f at a depth of some 100 bytes of stack each.
func dive(depth int, f func() int) int {
	var use [12]int
	if depth == 0 {
		return f()
	}
	use[depth%12] = dive(depth-1, f)
	return use[depth%12] + use[(depth+1)%12]
}

// Goal: slices that are too short are refused by every form. Method: each of them too short in
// turn.
func TestShortSlicesPanic(t *testing.T) {
	for _, name := range Available() {
		s, err := Select(name)
		if err != nil {
			t.Fatal(err)
		}
		r := rand.New(rand.NewPCG(21, 22))
		for short := range 4 {
			g := newGuarded(40, 7).generic(r)
			x, v, field, acc, out := inner(g.x), inner(g.v), inner(g.field), inner(g.acc), inner(g.out)
			switch short {
			case 0:
				v = v[:39:39]
			case 1:
				field = nil
			case 2:
				acc = acc[:6:6]
			case 3:
				out = out[:39:39]
			}
			func() {
				defer func() {
					if recover() == nil {
						t.Errorf("%s: no panic for short slice %d", name, short)
					}
				}()
				s.PushDeposit(x, v, field, acc, out)
			}()
		}
	}
}

// Goal: sets are found by name; a wrong name is told with those that work.
func TestSelect(t *testing.T) {
	names := Available()
	if names[0] != "portable" {
		t.Errorf("first of %v, want portable", names)
	}
	for _, name := range names {
		if s, err := Select(name); err != nil || s.Name != name || s.PushDeposit == nil {
			t.Errorf("Select(%q): %q, %v", name, s.Name, err)
		}
	}
	s, err := Select("")
	if err != nil || s.Name != names[len(names)-1] || Best().Name != s.Name {
		t.Errorf("best is %q and %q (%v), want the last of %v", s.Name, Best().Name, err, names)
	}
	_, err = Select("mmx")
	want := `kernels: got "mmx", want one that works here: portable`
	if err == nil || len(err.Error()) < len(want) || err.Error()[:len(want)] != want {
		t.Errorf("got %v, want %s...", err, want)
	}
}

// Goal: a particle that is outside before, against the promise, makes no form read stray memory,
// which may not be there. Method: fields behind the last cell that are no number.
func TestTwinsReadNothingBeyondTheField(t *testing.T) {
	twins(t, func(t *testing.T, s Set) {
		for _, x := range []float64{7.5, -1.5, -3, 10, 1e9, -1e9, 1e300, math.NaN()} {
			g := newGuarded(16, 7)
			for i := range inner(g.x) {
				inner(g.x)[i], inner(g.v)[i] = x, 0.5
			}
			for j := range inner(g.field) {
				inner(g.field)[j] = Field{}
			}
			g.push(s)
			for i, v := range inner(g.v) {
				if v != 0.5 && x == x {
					t.Errorf("x %g: v[%d] is %v, want 0.5 of a field that is 0", x, i, v)
				}
			}
		}
	})
}
