package mcc

import (
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

// Goal: detachment conserves momentum, and energy less the threshold, to rounding, by every law of
// sharing; both electrons go anywhere. Method: O- in motion and electrons of 3 to 50 eV; a sum of
// directions that vanishes within its error.
func TestDetachmentConserves(t *testing.T) {
	const threshold = 1.461
	ion := 15.999*phys.AtomicMass + phys.ElectronMass
	masses := [2]float64{phys.ElectronMass, ion}
	mass := [3]float64{phys.ElectronMass, phys.ElectronMass, ion - phys.ElectronMass}
	s := stream(60)
	for _, law := range []Sharing{EqualSharing, UniformSharing, OpalSharing} {
		d := NewDetachment(masses, threshold, law)
		for _, energy := range []float64{3, 10, 50} {
			speed := math.Sqrt(2 * energy * phys.ElementaryCharge / phys.ElectronMass)
			const unit, n = 1e4, 4000
			along, least := 0.0, math.Inf(1)
			v := [3]float64{0.6 * speed / unit, 0, -0.8 * speed / unit}
			i := [3]float64{0.1, -0.2, 0.05}
			for range n {
				out, ok := d.Free(s, v, i, unit)
				if !ok {
					t.Fatalf("%g eV do not reach", energy)
				}
				before, after, kinetic := [3]float64{}, [3]float64{}, -threshold*phys.ElementaryCharge
				for k := range 3 {
					before[k] = phys.ElectronMass*v[k] + ion*i[k]
					kinetic += 0.5 * unit * unit * (phys.ElectronMass*v[k]*v[k] + ion*i[k]*i[k])
				}
				left := 0.0
				for p, u := range [][3]float64{out.Electrons[0], out.Electrons[1], out.Neutral} {
					for k := range 3 {
						after[k] += mass[p] * u[k]
						left += 0.5 * unit * unit * mass[p] * u[k] * u[k]
					}
				}
				for k := range 3 {
					if math.Abs(after[k]-before[k]) > 1e-12*phys.ElectronMass*speed/unit {
						t.Fatalf("momentum %g, want %g", after[k], before[k])
					}
				}
				if math.Abs(left/kinetic-1) > 1e-12 {
					t.Fatalf("energy %g J, want %g", left, kinetic)
				}
				e := out.Electrons
				along += 0.6*e[0][0] - 0.8*e[0][2] + 0.6*e[1][0] - 0.8*e[1][2]
				least = math.Min(least, square(e[1]))
			}
			// Each electron goes forth as often as back, but for the motion of the centre of mass.
			drift := 2 * phys.ElectronMass / (ion + phys.ElectronMass) * speed / unit
			drift += 2 * (0.6*i[0] - 0.8*i[2])
			checkMean(t, "mean velocity along", along/n, drift, speed/unit/math.Sqrt(3*n))
			if half := 0.5 * (energy - threshold) / energy * square(v); law == EqualSharing &&
				math.Abs(least/half-1) > 0.02 {
				t.Errorf("%g eV: an electron with %g of half the rest", energy, least/half)
			}
		}
	}
	d := NewDetachment(masses, threshold, EqualSharing)
	slow := math.Sqrt(2 * 0.999 * threshold * phys.ElementaryCharge / phys.ElectronMass)
	if _, ok := d.Free(s, [3]float64{slow}, [3]float64{}, 1); ok {
		t.Error("below the threshold an electron came free")
	}
}

func square(v [3]float64) float64 { return v[0]*v[0] + v[1]*v[1] + v[2]*v[2] }

// Goal: the bundled cross section of e + O- has the rate coefficient that it was recalled with,
// 5.47e-14 Te^0.324 exp(-2.98/Te) m3/s, and so does the table that pairs are judged by. Method: means
// over Maxwellians by quadrature.
func TestDetachmentRate(t *testing.T) {
	pair := detachmentPair(t)
	r := NewPairRate(&pair.Table, pair.Masses, 100)
	mu := pair.Masses[0] * pair.Masses[1] / (pair.Masses[0] + pair.Masses[1])
	for _, te := range []float64{1, 2, 3, 5} {
		spread := math.Sqrt(te * phys.ElementaryCharge / mu)
		sum, norm := 0.0, 0.0
		const n = 40_000
		for i := range n {
			u := 7 * (float64(i) + 0.5) / n
			w := u * u * math.Exp(-0.5*u*u)
			sum, norm = sum+w*r.At(u*spread), norm+w
		}
		want := 5.47e-14 * math.Pow(te, 0.324) * math.Exp(-2.98/te)
		if got := sum / norm; math.Abs(got/want-1) > 5e-3 {
			t.Errorf("%g eV: %.5g m3/s, want %.5g", te, got, want)
		}
	}
}

func detachmentPair(t *testing.T) crosssections.Pair {
	t.Helper()
	for _, p := range bundled(t, "O2").Gas.Pairs {
		if p.Kind == crosssections.Detachment {
			return p
		}
	}
	t.Fatal("oxygen has no detachment by electrons")
	return crosssections.Pair{}
}
