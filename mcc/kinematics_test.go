package mcc

import (
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

const (
	heavy = 40 * phys.AtomicMass
	light = 7 * phys.ElectronMass // a target that recoils visibly
)

// onlyChannel makes a model of one process with a constant collision frequency, so that nearly
// every candidate collides.
func onlyChannel(t testing.TB, projectile string, kind crosssections.Kind, mass, target,
	temperature, thresholdEV, topEV float64,
) *Model {
	t.Helper()
	sigma := inverseSpeed(1e9, testDensity, mass)
	b := background(target, temperature,
		process("p", projectile, kind, thresholdEV, tabulate(thresholdEV, topEV, sigma)))
	return mustModel(t, projectile, mass, topEV, 0.3, b)
}

// elasticCases are all kinds of collision without loss, with cold and warm, equal, light and
// heavy targets.
var elasticCases = []struct {
	name           string
	projectile     string
	kind           crosssections.Kind
	mass, target   float64
	temperature    float64
	energyEV, topE float64
}{
	{
		"electron on heavy, cold", "e", crosssections.Elastic,
		phys.ElectronMass, heavy, 0, 3, 100,
	},
	{
		"electron on light, warm", "e", crosssections.Elastic,
		phys.ElectronMass, light, 2000, 3, 100,
	},
	{"ion isotropic, equal masses", "X+", crosssections.Isotropic, heavy, heavy, 300, 0.2, 10},
	{
		"ion isotropic, light target", "X+", crosssections.Isotropic,
		heavy, 4 * phys.AtomicMass, 300, 0.2, 10,
	},
	{"ion backscatter, equal masses", "X+", crosssections.Backscatter, heavy, heavy, 300, 0.2, 10},
	{
		"ion backscatter, light target", "X+", crosssections.Backscatter,
		heavy, 4 * phys.AtomicMass, 300, 0.2, 10,
	},
}

// tilted is a direction without special components.
func tilted() vector { return vector{0.48, -0.6, 0.64} }

// Goal: every elastic collision conserves momentum and energy. Method: the target's recoil
// follows from momentum; the energies before and after must then be equal to rounding, and the
// relative speed too. Warm targets are drawn again from a copy of the stream.
//
// Ref: L. D. Landau and E. M. Lifshitz, Mechanics, 3rd ed. (1976), par. 17.
func TestElasticCollisionsConserveMomentumAndEnergy(t *testing.T) {
	for _, c := range elasticCases {
		m := onlyChannel(t, c.projectile, c.kind, c.mass, c.target, c.temperature, 0, c.topE)
		s := stream(1)
		v := tilted().scale(speedOf(c.energyEV, c.mass))
		for range 2000 {
			got := single(m, s, v)
			recoil := got.target.add(-c.mass/c.target, got.after.add(-1, got.before))
			before := c.mass*v.dot(v) + c.target*got.target.dot(got.target)
			after := c.mass*got.after.dot(got.after) + c.target*recoil.dot(recoil)
			if math.Abs(after-before) > 1e-12*before {
				t.Fatalf("%s: energy %g after, %g before", c.name, after, before)
			}
			g0 := v.add(-1, got.target)
			g1 := got.after.add(-1, recoil)
			if math.Abs(g1.norm()-g0.norm()) > 1e-12*g0.norm() {
				t.Fatalf("%s: relative speed %g after, %g before", c.name, g1.norm(), g0.norm())
			}
			if got.after == got.before {
				t.Fatalf("%s: nothing happened", c.name)
			}
			turn := g1.add(1, g0).norm() / g0.norm()
			if c.kind == crosssections.Backscatter && turn > 1e-12 {
				t.Fatalf("%s: relative velocity %v after %v is not turned round", c.name, g1, g0)
			}
		}
	}
}

// angles counts directions in bins of equal solid angle about an axis.
type angles struct {
	counts []int
	n      int
}

const polarBins, azimuthBins = 20, 12

func (a *angles) add(axis, direction vector) {
	if a.counts == nil {
		a.counts = make([]int, polarBins*azimuthBins)
	}
	ez := axis.scale(1 / axis.norm())
	ex := ez.cross(vector{1, 0, 0})
	ex = ex.scale(1 / ex.norm())
	ey := ez.cross(ex)
	d := direction.scale(1 / direction.norm())
	polar := min(polarBins-1, int((1+d.dot(ez))/2*polarBins))
	turn := (math.Atan2(d.dot(ey), d.dot(ex))/math.Pi + 1) / 2
	a.counts[max(0, polar)*azimuthBins+min(azimuthBins-1, int(turn*azimuthBins))]++
	a.n++
}

func (a *angles) check(t *testing.T, name string) {
	t.Helper()
	checkChiSquare(t, name, a.counts, equalBins(a.n, len(a.counts)))
}

func trials() int {
	if testing.Short() {
		return 20_000
	}
	return 100_000
}

// Goal: elastic scattering is isotropic in the centre of mass, in angle and azimuth. Method:
// chi-square over 240 bins of equal solid angle about the relative velocity.
//
// Ref: V. Vahedi and M. Surendra, Comput. Phys. Commun. 87, 179 (1995).
func TestElasticScatteringIsIsotropic(t *testing.T) {
	for i, c := range elasticCases {
		if c.kind == crosssections.Backscatter {
			continue
		}
		m := onlyChannel(t, c.projectile, c.kind, c.mass, c.target, c.temperature, 0, c.topE)
		s := stream(uint64(10 + i))
		v := tilted().scale(speedOf(c.energyEV, c.mass))
		var seen angles
		for range trials() {
			got := single(m, s, v)
			f := c.mass / (c.mass + c.target)
			center := v.scale(f).add(1-f, got.target)
			seen.add(v.add(-1, got.target), got.after.add(-1, center))
		}
		seen.check(t, c.name)
	}
}

// Goal: an elastic collision with a target at rest costs 2 m M/(m+M)^2 (1 - cos chi) of the
// energy, chi in the centre of mass, and 2 m M/(m+M)^2 on average. Method: each collision to
// rounding; the mean within the spread of 1 - cos, whose variance is 1/3. Outcome.Loss adds up
// the same.
//
// Ref: L. D. Landau and E. M. Lifshitz, Mechanics, 3rd ed. (1976), par. 17.
func TestElasticLoss(t *testing.T) {
	for i, target := range []float64{heavy, light} {
		m := onlyChannel(t, "e", crosssections.Elastic, phys.ElectronMass, target, 0, 0, 100)
		s := stream(uint64(20 + i))
		v := tilted().scale(speedOf(7, phys.ElectronMass))
		sum := phys.ElectronMass + target
		full := 2 * phys.ElectronMass * target / (sum * sum)
		mean := 0.0
		for range trials() {
			got := single(m, s, v)
			center := v.scale(phys.ElectronMass / sum)
			d := got.after.add(-1, center)
			cosine := d.dot(v) / (d.norm() * v.norm())
			loss := 1 - got.after.dot(got.after)/v.dot(v)
			if math.Abs(loss-full*(1-cosine)) > 1e-13 {
				t.Fatalf("M/m %g: lost %g, want %g", target/phys.ElectronMass, loss,
					full*(1-cosine))
			}
			mean += loss / float64(trials())
		}
		checkMean(t, "mean loss", mean, full, full/math.Sqrt(3*float64(trials())))
	}
}

// Goal: Outcome.Loss is the kinetic energy that the electrons lost. Method: sums of v^2 before
// and after, all processes of argon, electrons of 60 eV, births included.
func TestLossIsTheBookkeepingOfEnergy(t *testing.T) {
	b := bundled(t, "Ar")
	for _, projectile := range []string{"e", "Ar+"} {
		mass := phys.ElectronMass
		if projectile != "e" {
			mass = b.Gas.Mass
		}
		m := mustModel(t, projectile, mass, 500, 0.8, b)
		s := stream(31)
		vx, vy, vz := maxwellian(s, 20_000, 60/1.5*phys.ElementaryCharge/phys.Boltzmann, mass)
		before := sumSquares(vx, vy, vz)
		out := m.NewOutcome()
		m.Collide(s, vx, vy, vz, out)
		after := sumSquares(vx, vy, vz)
		for _, birth := range out.Births {
			after += vector(birth.Electron).dot(birth.Electron)
		}
		loss := 0.0
		for _, l := range out.Loss {
			loss += l
		}
		if math.Abs(before-after-loss) > 1e-12*before || loss < 1e-3*before {
			t.Errorf("%s: lost %g by the sums, %g by Outcome.Loss", projectile, before-after, loss)
		}
	}
}

func sumSquares(list ...[]float64) float64 {
	sum := 0.0
	for _, v := range list {
		for _, x := range v {
			sum += x * x
		}
	}
	return sum
}

// Goal: an excitation takes exactly the threshold from the relative motion and scatters
// isotropically in the centre of mass. Method: mu g^2/2 before and after to rounding, with
// the target's recoil from momentum; chi-square of the direction.
func TestExcitationLosesTheThreshold(t *testing.T) {
	const thresholdEV = 11.5
	for i, target := range []float64{heavy, light} {
		m := onlyChannel(t, "e", crosssections.Excitation, phys.ElectronMass, target, 400,
			thresholdEV, 100)
		s := stream(uint64(40 + i))
		v := tilted().scale(speedOf(19, phys.ElectronMass))
		mu := phys.ElectronMass * target / (phys.ElectronMass + target)
		joule := 0.5 * mu * testUnit * testUnit
		var seen angles
		for range trials() / 2 {
			got := single(m, s, v)
			recoil := got.target.add(-phys.ElectronMass/target, got.after.add(-1, v))
			g0, g1 := v.add(-1, got.target), got.after.add(-1, recoil)
			lostEV := joule * (g0.dot(g0) - g1.dot(g1)) / phys.ElementaryCharge
			if math.Abs(lostEV-thresholdEV) > 1e-11*thresholdEV {
				t.Fatalf("M/m %g: lost %.15g eV, want %g", target/phys.ElectronMass, lostEV,
					thresholdEV)
			}
			seen.add(g0, g1)
		}
		seen.check(t, "excitation")
	}
}

// Goal: both electrons of an ionization share the excess energy equally, in the target's frame,
// and are sent out isotropically; the ion keeps the target's velocity. Method: the sum to
// rounding against mu g^2/2 - threshold; chi-square of both directions.
//
// Ref: M. M. Turner et al., Phys. Plasmas 20, 013507 (2013), equal sharing, isotropic.
func TestIonizationSharesTheExcess(t *testing.T) {
	const thresholdEV = 15.8
	m := onlyChannel(t, "e", crosssections.Ionization, phys.ElectronMass, heavy, 300,
		thresholdEV, 100)
	s := stream(50)
	v := tilted().scale(speedOf(40, phys.ElectronMass))
	mu := phys.ElectronMass * heavy / (phys.ElectronMass + heavy)
	toEV := 0.5 * testUnit * testUnit / phys.ElementaryCharge
	var old, born angles
	for range trials() / 2 {
		got := single(m, s, v)
		if len(got.births) != 1 || got.births[0].Parent != 0 || got.births[0].Channel != 0 {
			t.Fatalf("births %+v, want one of particle 0 by channel 0", got.births)
		}
		if vector(got.births[0].Ion) != got.target {
			t.Fatalf("ion starts at %v, target had %v", got.births[0].Ion, got.target)
		}
		g := v.add(-1, got.target)
		a := got.after.add(-1, got.target)
		b := vector(got.births[0].Electron).add(-1, got.target)
		excess := toEV*mu*g.dot(g) - thresholdEV
		ea, eb := toEV*phys.ElectronMass*a.dot(a), toEV*phys.ElectronMass*b.dot(b)
		if math.Abs(ea+eb-excess) > 1e-11*excess || math.Abs(ea-eb) > 1e-11*excess {
			t.Fatalf("electrons have %.14g and %.14g eV, want half of %.14g each", ea, eb, excess)
		}
		old.add(v, a)
		born.add(v, b)
	}
	old.check(t, "scattered electron")
	born.check(t, "new electron")
}
