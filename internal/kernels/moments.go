package kernels

import "math"

// Moments are sums over the particles of a cell, and the parts of them that linear weighting
// gives to the right node. Node j has, with C the cells,
//
//	power[j] = C[j].Power - C[j].PowerRight + C[j-1].PowerRight
//
// and so on. The unit is that of v^2.
type Moments struct {
	// Power is a v: what the field does in a move is m a v.
	Power, PowerRight float64
	// Energy is v^2, of all three components.
	Energy, EnergyRight float64
}

// AddMoments adds the moments of particles before their kick, x^n and v^(n-1/2), to their cells,
// in the order of the particles:
//
//	a = field at x;  v = vx + a/2;  e = v^2 + vy^2 + vz^2
//
// e goes to energy. The number of particles with |v| > 1 is returned: they cross more than a cell
// in a move. All x must be inside. Needs len(sums) >= len(field), len(energy) >= len(x).
func AddMoments(
	x, vx, vy, vz []float64, field []Field, sums []Moments, energy []float64,
) int {
	vx, vy, vz = vx[:len(x)], vy[:len(x)], vz[:len(x)]
	energy = energy[:len(x)]
	sums = sums[:len(field)]
	fast := 0
	for i, xi := range x {
		j := int(xi)
		f := &field[j]
		s := xi - float64(j)
		a := f.A + float64(s*f.D)
		v := vx[i] + float64(0.5*a)
		e := float64(v*v) + float64(vy[i]*vy[i]) + float64(vz[i]*vz[i])
		p := float64(a * v)
		m := &sums[j]
		m.Power += p
		m.PowerRight += float64(s * p)
		m.Energy += e
		m.EnergyRight += float64(s * e)
		energy[i] = e
		fast += number(math.Abs(v) > 1)
	}
	return fast
}

// Spectrum counts particles by zone of the gap and by bin of energy.
type Spectrum struct {
	// Edges part the zones [cells], in increasing order; what lies on an edge is right of it.
	Edges [4]float64
	// PerEnergy is the number of steps of Bin in a unit of energy.
	PerEnergy float64
	// Bin has the bin of each step of energy; the last holds for all energies above, too.
	Bin []int32
	// Bins is their number in a zone.
	Bins int
	// Counts of all zones, one after another: 5 x Bins.
	Counts []int64
}

// Add counts particles at x of the given energies. What is negative or no number goes to the last
// bin.
func (s *Spectrum) Add(x, energy []float64) {
	energy = energy[:len(x)]
	edges, perEnergy, table, bins, counts := s.Edges, s.PerEnergy, s.Bin, s.Bins, s.Counts
	last := uint(len(table) - 1)
	for i, xi := range x {
		// No branch: which zone a particle is in cannot be predicted.
		zone := number(xi >= edges[0]) + number(xi >= edges[1]) +
			number(xi >= edges[2]) + number(xi >= edges[3])
		step := min(uint(int(energy[i]*perEnergy)), last)
		counts[zone*bins+int(table[step])]++
	}
}

func number(b bool) int {
	if b {
		return 1
	}
	return 0
}
