package kernels

import (
	"math"
	"math/rand/v2"
	"testing"
)

// plainPush is the textbook loop: no fixed-point form, no fused deposition.
func plainPush(x, v []float64, field []Field, number []float64) (out []int32) {
	cells := float64(len(field))
	for i := range x {
		j := math.Floor(x[i])
		s := x[i] - j
		v[i] += field[int(j)].A + s*field[int(j)].D
		x[i] += v[i]
		if x[i] < 0 || x[i] >= cells {
			out = append(out, int32(i))
			continue
		}
		j = math.Floor(x[i])
		number[int(j)] += 1 - (x[i] - j)
		number[int(j)+1] += x[i] - j
	}
	return out
}

func particles(r *rand.Rand, n, cells int) (x, v []float64, field []Field) {
	x, v = make([]float64, n), make([]float64, n)
	for i := range x {
		x[i] = r.Float64() * float64(cells)
		v[i] = 0.3 * r.NormFloat64()
	}
	field = make([]Field, cells)
	for j := range field {
		field[j] = Field{0.1 * r.NormFloat64(), 0.1 * r.NormFloat64()}
	}
	return x, v, field
}

// Goal: the kernel is the textbook loop. Method: compare at many sizes; positions and
// velocities to rounding, node sums within half a unit of the fixed point for each particle.
func TestPushDepositIsTheTextbookLoop(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for n := 0; n <= 64; n++ {
		for _, cells := range []int{2, 7, 128, 513} {
			x, v, field := particles(r, n, cells)
			px, pv := append([]float64{}, x...), append([]float64{}, v...)
			acc, out := make([]uint64, cells), make([]int32, n)
			left := PushDeposit(x, v, field, acc, out)
			number, plain := make([]float64, cells+1), make([]float64, cells+1)
			AddDensity(acc, number)
			plainOut := plainPush(px, pv, field, plain)
			if left != len(plainOut) {
				t.Fatalf("n %d cells %d: %d left, want %d", n, cells, left, len(plainOut))
			}
			for i := range plainOut {
				if out[i] != plainOut[i] {
					t.Fatalf("left particle %d is %d, want %d", i, out[i], plainOut[i])
				}
			}
			for i := range x {
				if math.Abs(x[i]-px[i]) > 1e-12 || math.Abs(v[i]-pv[i]) > 1e-13 {
					t.Fatalf("particle %d: %g %g, want %g %g", i, x[i], v[i], px[i], pv[i])
				}
			}
			for j := range number {
				if math.Abs(number[j]-plain[j]) > float64(n)*0x1p-24 {
					t.Fatalf("node %d: %g, want %g", j, number[j], plain[j])
				}
			}
		}
	}
}

// Goal: edges of the grid. Method: particles on nodes, at both walls and a hair beside them.
func TestEdges(t *testing.T) {
	cells := 4
	field := make([]Field, cells)
	for _, c := range []struct {
		x, v   float64
		inside bool
	}{
		{0, 0, true},
		{1, 0, true},
		{3.999, 0, true},
		{1, -1, true},
		{1, -1.0001, false},
		{3, 1, false},
		{3, 0.9999, true},
		{2, 2, false},
		{2, 1e6, false},
		{2, -1e6, false},
	} {
		x, v := []float64{c.x}, []float64{c.v}
		acc, out := make([]uint64, cells), make([]int32, 1)
		left := PushDeposit(x, v, field, acc, out)
		if (left == 0) != c.inside || Inside(x[0], cells) != c.inside {
			t.Errorf("x %g v %g: inside is %v, want %v", c.x, c.v, left == 0, c.inside)
		}
		number := make([]float64, cells+1)
		AddDensity(acc, number)
		sum := 0.0
		for _, q := range number {
			sum += q
		}
		if sum != float64(1-left) {
			t.Errorf("x %g v %g: %g deposited", c.x, c.v, sum)
		}
	}
}

// Goal: charge is conserved to the last bit and does not depend on order.
func TestDepositIsExact(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	x, _, _ := particles(r, 100_000, 37)
	a, b := make([]uint64, 37), make([]uint64, 37)
	Deposit(x, a)
	r.Shuffle(len(x), func(i, j int) { x[i], x[j] = x[j], x[i] })
	Deposit(x, b)
	number, sum := make([]float64, 38), 0.0
	AddDensity(a, number)
	for j := range number {
		sum += number[j]
	}
	for j := range a {
		if a[j] != b[j] {
			t.Fatalf("cell %d: %x after shuffling, %x before", j, b[j], a[j])
		}
	}
	if sum != 100_000 {
		t.Errorf("sum of node numbers is %v", sum)
	}
}
