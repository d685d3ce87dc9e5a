package kernels

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// measured is an input of AddMoments between guards, as in guarded.
type measured struct {
	x, vx, vy, vz, energy []float64
	field                 []Field
	sums                  []Moments
}

func newMeasured(r *rand.Rand, n, cells int) *measured {
	nan := math.Float64frombits(poison)
	fill := func() []float64 {
		s := slices.Repeat([]float64{nan}, n+2*guard)
		for i := range inner(s) {
			inner(s)[i] = 0.6 * r.NormFloat64()
		}
		return s
	}
	m := &measured{
		x: fill(), vx: fill(), vy: fill(), vz: fill(), energy: fill(),
		field: slices.Repeat([]Field{{nan, nan}}, cells+2*guard),
		sums:  slices.Repeat([]Moments{{nan, nan, nan, nan}}, cells+2*guard),
	}
	for i := range inner(m.x) {
		inner(m.x)[i] = r.Float64() * (float64(cells) - 0x1p-20)
	}
	for j := range inner(m.field) {
		inner(m.field)[j] = Field{0.3 * r.NormFloat64(), 0.3 * r.NormFloat64()}
		inner(m.sums)[j] = Moments{
			r.NormFloat64(), r.NormFloat64(), r.NormFloat64(), r.NormFloat64(),
		}
	}
	return m
}

func (m *measured) clone() *measured {
	return &measured{
		slices.Clone(m.x), slices.Clone(m.vx), slices.Clone(m.vy), slices.Clone(m.vz),
		slices.Clone(m.energy), slices.Clone(m.field), slices.Clone(m.sums),
	}
}

func (m *measured) add(s Set) int {
	return s.AddMoments(inner(m.x), inner(m.vx), inner(m.vy), inner(m.vz), inner(m.field),
		inner(m.sums), inner(m.energy))
}

func flat(sums []Moments) []float64 {
	var list []float64
	for _, m := range sums {
		list = append(list, m.Power, m.PowerRight, m.Energy, m.EnergyRight)
	}
	return list
}

func compareMoments(t *testing.T, s Set, m *measured) {
	t.Helper()
	want := m.clone()
	fast, wantFast := m.add(s), want.add(Set{AddMoments: AddMoments})
	where := fmt.Sprintf("%s, %d particles, %d cells", s.Name, len(m.x)-2*guard, len(m.sums)-2*guard)
	if fast != wantFast {
		t.Errorf("%s: %d are fast, want %d", where, fast, wantFast)
	}
	sameBits(t, where+": energy", m.energy, want.energy)
	sameBits(t, where+": sums", flat(m.sums), flat(want.sums))
	for _, pair := range [][2][]float64{
		{m.x, want.x}, {m.vx, want.vx}, {m.vy, want.vy}, {m.vz, want.vz},
	} {
		sameBits(t, where+": input", pair[0], pair[1])
	}
	if t.Failed() {
		t.FailNow()
	}
}

// Goal: every form of the moments is the portable one to the bit, order of the sums included.
// Method: all lengths about the vector, the ring and the block; also few cells, and all
// particles in one, where the order of the sums matters most.
func TestMomentsTwins(t *testing.T) {
	lengths := []int{2040, 2048, 2055, 4103}
	for n := range 64 + 2*8 + 9 {
		lengths = append(lengths, n)
	}
	twins(t, func(t *testing.T, s Set) {
		r := rand.New(rand.NewPCG(23, 24))
		for _, cells := range append(gridSizes, 1) {
			for _, n := range lengths {
				compareMoments(t, s, newMeasured(r, n, cells))
				m := newMeasured(r, n, cells)
				for i := range inner(m.x) {
					inner(m.x)[i] = float64(cells-1) + 0.9*r.Float64()
				}
				compareMoments(t, s, m)
			}
		}
	})
}

// Goal: the edges. Method: particles on nodes, a hair beside walls, at speeds about one cell a
// move and of no number, in every lane.
func TestMomentsTwinsAtEdges(t *testing.T) {
	speeds := []float64{1, -1, 0x1.0000000000001p0, -0x1.0000000000001p0, 0, math.Inf(1), math.NaN()}
	twins(t, func(t *testing.T, s Set) {
		r := rand.New(rand.NewPCG(25, 26))
		for _, cells := range gridSizes {
			for range 50 {
				m := newMeasured(r, 27, cells)
				clear(inner(m.field))
				for i := range inner(m.x) {
					at := float64(r.IntN(cells))
					inner(m.x)[i] = [...]float64{at, -1e-9, float64(cells) - 0x1p-23, at + 0.5}[r.IntN(4)]
					inner(m.vx)[i] = speeds[r.IntN(len(speeds))]
				}
				compareMoments(t, s, m)
			}
		}
	})
}

// Goal: the moments of nodes are those of the plain loop. Method: the formula of the comment
// against sums to nodes, to rounding: n = 5000 terms of about 1.
func TestMomentsOfNodes(t *testing.T) {
	const n, cells = 5000, 17
	r := rand.New(rand.NewPCG(27, 28))
	m := newMeasured(r, n, cells)
	clear(inner(m.sums))
	power, energy := make([]float64, cells+1), make([]float64, cells+1)
	fast := 0
	for i, x := range inner(m.x) {
		j := int(x)
		s := x - math.Floor(x)
		a := (1-s)*inner(m.field)[j].A + s*(inner(m.field)[j].A+inner(m.field)[j].D)
		v := inner(m.vx)[i] + a/2
		e := v*v + math.Pow(inner(m.vy)[i], 2) + math.Pow(inner(m.vz)[i], 2)
		power[j] += (1 - s) * a * v
		power[j+1] += s * a * v
		energy[j] += (1 - s) * e
		energy[j+1] += s * e
		if math.Abs(v) > 1 {
			fast++
		}
	}
	if got := m.add(Set{AddMoments: AddMoments}); got != fast {
		t.Errorf("%d are fast, want %d", got, fast)
	}
	sums := append([]Moments{{}}, append(slices.Clone(inner(m.sums)), Moments{})...)
	for j := range power {
		left, c := sums[j], sums[j+1]
		p := c.Power - c.PowerRight + left.PowerRight
		e := c.Energy - c.EnergyRight + left.EnergyRight
		if math.Abs(p-power[j]) > 1e-11 || math.Abs(e-energy[j]) > 1e-11 {
			t.Errorf("node %d: power %v, energy %v, want %v, %v", j, p, e, power[j], energy[j])
		}
	}
}

// Goal: particles are counted in their zone and bin, at the edges too. Method: against a search.
func TestSpectrum(t *testing.T) {
	edges := []float64{2, 3.5, 4.5, 6}
	bounds := []float64{0, 0.1, 0.2, 0.5, 0.9} // multiples of the step 0.1; the last has no end
	s := Spectrum{
		Edges: [4]float64(edges), PerEnergy: 10, Bin: []int32{0, 1, 2, 2, 2, 3, 3, 3, 3, 4}, Bins: 5,
		Counts: make([]int64, 25),
	}
	want := make([]int64, 25)
	r := rand.New(rand.NewPCG(29, 30))
	var x, energy []float64
	for range 2000 {
		x = append(x, 8*r.Float64())
		energy = append(energy, 1.3*r.Float64())
	}
	x = append(x, edges...)
	energy = append(energy, 0, 0.05, 1, 1e12)
	x = append(x, 0, -1e-9, 8)
	energy = append(energy, math.NaN(), math.Inf(1), 1e300)
	for i := range x {
		zone, bin := 0, 0
		for zone < 4 && x[i] >= edges[zone] {
			zone++
		}
		for bin < 4 && !(energy[i] < bounds[bin+1]) {
			bin++
		}
		want[5*zone+bin]++
	}
	s.Add(x, energy)
	if !slices.Equal(s.Counts, want) {
		t.Errorf("got %v, want %v", s.Counts, want)
	}
}

func BenchmarkAddMoments(b *testing.B) {
	const cells = 128
	for _, name := range Available() {
		s, err := Select(name)
		if err != nil {
			b.Fatal(err)
		}
		for _, n := range []int{2048, 130_000} {
			b.Run(fmt.Sprintf("%s/%dx%d", name, cells, n), func(b *testing.B) {
				m := newMeasured(rand.New(rand.NewPCG(5, 6)), n, cells)
				for b.Loop() {
					m.add(s)
				}
				b.ReportMetric(float64(n)*float64(b.N)/b.Elapsed().Seconds()/1e6, "Mparticles/s")
			})
		}
	}
}

func BenchmarkSpectrum(b *testing.B) {
	const n, bins = 130_000, 300
	r := rand.New(rand.NewPCG(5, 6))
	x, energy := make([]float64, n), make([]float64, n)
	for i := range x {
		x[i], energy[i] = 128*r.Float64(), 0.1*r.ExpFloat64()
	}
	s := Spectrum{
		Edges: [4]float64{32, 51.2, 76.8, 96}, PerEnergy: 2000, Bin: make([]int32, 5000),
		Bins: bins, Counts: make([]int64, 5*bins),
	}
	for i := range s.Bin {
		s.Bin[i] = int32(i * bins / len(s.Bin))
	}
	for b.Loop() {
		s.Add(x, energy)
	}
	b.ReportMetric(float64(n)*float64(b.N)/b.Elapsed().Seconds()/1e6, "Mparticles/s")
}
