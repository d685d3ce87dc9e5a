package mcc

import (
	"fmt"
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/stats"
	"ionfall/internal/validation"
)

// reaction is a process that makes the products, at 1e9 /s.
func reaction(kind crosssections.Kind, mass float64, out ...crosssections.Particle) crosssections.Process {
	projectile := "X+"
	if kind == crosssections.Attachment {
		projectile = "e"
	}
	p := process("r", projectile, kind, 0, tabulate(0, 1000, inverseSpeed(1e9, testDensity, mass)))
	p.Out = out
	return p
}

// Goal: reactions keep momentum, and energy but for the defect, whatever the number of products and
// where the first one goes. Method: sums over the products of many collisions with a warm target,
// to rounding.
func TestReactionsConserve(t *testing.T) {
	const u = phys.AtomicMass
	part := func(name string, mass float64, charge int) crosssections.Particle {
		return crosssections.Particle{Name: name, Mass: mass * u, Charge: charge}
	}
	for name, c := range map[string]struct {
		cost, release float64
		scattering    crosssections.Scattering
		out           []crosssections.Particle
	}{
		"two":           {0, 0, 0, []crosssections.Particle{part("A+", 11, 1), part("B", 31, 0)}},
		"two, costs":    {2, 0, crosssections.Forward, []crosssections.Particle{part("A", 11, 0), part("B+", 31, 1)}},
		"two, backward": {0, 0, crosssections.Backward, []crosssections.Particle{part("A+", 11, 1), part("B", 31, 0)}},
		"three":         {1, 0, 0, []crosssections.Particle{part("A+", 5, 1), part("B", 7, 0), part("C", 30, 0)}},
		"four":          {0, 1.5, 0, []crosssections.Particle{part("A+", 5, 1), part("B", 7, 0), part("C", 10, 0), part("D", 20, 0)}},
		"stays itself":  {1, 0, 0, []crosssections.Particle{part("X+", 12, 1), part("B", 15, 0), part("C", 15, 0)}},
	} {
		t.Run(name, func(t *testing.T) {
			p := reaction(crosssections.Reaction, 12*u, c.out...)
			p.Threshold, p.Release, p.Scattering = c.cost, c.release, c.scattering
			m := mustModel(t, "X+", 12*u, 100, 0.3, background(30*u, 300, p))
			s := stream(41)
			for range 200 {
				checkReaction(t, m, single(m, s, tilted().scale(speedOf(20, 12*u))), c.out,
					c.release-c.cost)
			}
		})
	}
}

// checkReaction compares sums before and after; gain is in eV.
func checkReaction(t *testing.T, m *Model, got collision, out []crosssections.Particle, gain float64) {
	t.Helper()
	const u = phys.AtomicMass
	momentum := got.before.scale(12*u).add(30*u, got.target)
	energy := 12*u*got.before.dot(got.before) + 30*u*got.target.dot(got.target) +
		2*gain*phys.ElementaryCharge/(testUnit*testUnit)
	most, all := momentum.norm(), energy
	count := 0
	for _, made := range got.made {
		v := vector(made.V)
		mass := out[made.Product].Mass
		momentum = momentum.add(-mass, v)
		energy -= mass * v.dot(v)
		count++
	}
	for _, p := range out {
		if p.Name == "X+" {
			momentum = momentum.add(-p.Mass, got.after)
			energy -= p.Mass * got.after.dot(got.after)
			count++
		}
	}
	if count != len(out) {
		t.Fatalf("%d products, want %d", count, len(out))
	}
	if momentum.norm() > 1e-12*most || math.Abs(energy) > 1e-11*all {
		t.Fatalf("momentum off by %g of %g, energy by %g of %g", momentum.norm(), most, energy, all)
	}
	if first := m.channels[0].process.Scattering; first == crosssections.Forward {
		g := got.before.add(-1, got.target)
		frame := got.before.scale(12./42).add(30./42, got.target)
		if along := vector(got.made[0].V).add(-1, frame); along.dot(g) < 0.999999*along.norm()*g.norm() {
			t.Fatal("the first product does not go on as the projectile did")
		}
	}
}

// Goal: an electron that attaches is gone and its fragments keep momentum; a particle that is gone
// does not collide again in the same step. Method: many candidates a step, counts.
func TestAttachmentTakesTheElectron(t *testing.T) {
	const u = phys.AtomicMass
	p := reaction(crosssections.Attachment, phys.ElectronMass,
		crosssections.Particle{Name: "A-", Mass: 16 * u, Charge: -1},
		crosssections.Particle{Name: "B", Mass: 16 * u})
	m := mustModel(t, "e", phys.ElectronMass, 100, 1.9, background(32*u, 300, p))
	s := stream(42)
	vx, vy, vz := maxwellian(s, 10_000, 30_000, phys.ElectronMass)
	out := m.NewOutcome()
	m.Collide(s, vx, vy, vz, out)
	if int64(len(out.Gone)) != out.Counts[0] || len(out.Made) != 2*len(out.Gone) {
		t.Errorf("%d gone, %d made, %d collisions", len(out.Gone), len(out.Made), out.Counts[0])
	}
	for i := 1; i < len(out.Gone); i++ {
		if out.Gone[i] <= out.Gone[i-1] {
			t.Fatalf("particle %d gone after %d", out.Gone[i], out.Gone[i-1])
		}
	}
	// Each attaches with the probability 1 - exp(-nu dt); five standard errors.
	part := 1 - math.Exp(-m.CandidateRate())
	got, spread := float64(len(out.Gone)), math.Sqrt(10_000*part*(1-part))
	if got > 10_000*part+5*spread || got < 0.9*10_000*part {
		t.Errorf("%g of 10000 attached, want at most %g +- %g (some candidates are null)", got,
			10_000*part, spread)
	}
}

// Goal: a beam of H2+ in hydrogen becomes H3+ at the published rate of 2.08e-15 m3/s (L. P. Theard
// and W. T. Huntress, J. Chem. Phys. 60, 2840 (1974)). Method: ions of the gas's temperature; the
// ions left against exp(-k n t) after a time in which half of them react; 3 standard errors of the
// number of reactions.
func TestHydrogenIonsReact(t *testing.T) {
	b := bundled(t, "H2")
	ion, _ := b.Gas.Ion("H2+")
	const n, k = 200_000, 2.08e-15
	set := Settings{
		Projectile: "H2+", Mass: ion.Mass, Charge: 1, Unit: testUnit, TopEnergy: 10,
		TimeStep: math.Ln2 / (k * b.Density) / 40,
	}
	m, err := NewModel(set, []Background{b})
	if err != nil {
		t.Fatal(err)
	}
	s := stream(43)
	vx, vy, vz := maxwellian(s, n, 300, ion.Mass)
	out := m.NewOutcome()
	made := 0
	for range 40 {
		m.Collide(s, vx, vy, vz, out)
		for i := len(out.Gone) - 1; i >= 0; i-- {
			g, last := out.Gone[i], len(vx)-1
			vx[g], vy[g], vz[g] = vx[last], vy[last], vz[last]
			vx, vy, vz = vx[:last], vy[:last], vz[:last]
		}
		for _, p := range out.Made {
			if m.channels[p.Channel].process.Out[p.Product].Name == "H3+" {
				made++
			}
		}
		out.Gone, out.Made = out.Gone[:0], out.Made[:0]
	}
	rate := math.Log(float64(n)/float64(len(vx))) / (b.Density * 40 * set.TimeStep)
	se := rate / math.Sqrt(float64(n-len(vx)))
	t.Logf("%.4g +- %.1g m3/s", rate, se)
	if math.Abs(rate-k) > 3*se || made != n-len(vx) {
		t.Errorf("rate %.4g +- %.1g m3/s, want %.4g; %d of %d are H3+", rate, se, k, made, n-len(vx))
	}
	validation.Record(t, gasRows, *update, validation.Row{
		Section: "ions change on the way", Quantity: "H2+ + H2 -> H3+ + H at 300 K", Unit: "m3/s",
		Reference: k, Source: "L. P. Theard and W. T. Huntress, J. Chem. Phys. 60, 2840 (1974)",
		Status: "read", Ours: rate, OursError: se, Limit: 3, LimitKind: validation.Sigma, Seed: 43,
	})
}

const gasRows = "../testdata/validation/gases.json"

// Goal: in silane electrons attach as often as the attachment cross section and their distribution
// say, and the growth of the swarm is ionization less attachment. Method: swarms at fields where
// either wins; the rate from the counted collisions against the integral over the measured energy
// distribution, and the growth against the number of particles; 4 standard errors, and 1 % for the
// bins.
func TestSilaneAttachmentBalance(t *testing.T) {
	if testing.Short() {
		t.Skip("some seconds")
	}
	b := bundled(t, "SiH4")
	b.Temperature, b.Density = 300, swarmDensity
	for _, field := range []float64{150, 300} {
		set := asked(SwarmSettings{Projectile: "e", Field: field})
		if *validate {
			set.RateError = 0.03
		}
		r := mustSwarm(t, set, b)
		attached, ionized := stats.Estimate{}, stats.Estimate{}
		expected, expectedIons := 0.0, 0.0
		for i := range b.Gas.Electron {
			p := &b.Gas.Electron[i]
			rate := overDistribution(&r, &p.Table)
			switch p.Kind {
			case crosssections.Attachment:
				attached, expected = r.Rates[i].Rate, rate
			case crosssections.Ionization:
				ionized.Mean += r.Rates[i].Rate.Mean
				ionized.StdErr = math.Hypot(ionized.StdErr, r.Rates[i].Rate.StdErr)
				expectedIons += rate
			}
		}
		t.Logf("%g Td: attachment %.4g +- %.1g, from the distribution %.4g; ionization %.4g +- %.1g, "+
			"%.4g m3/s; growth %.4g", field, attached.Mean, attached.StdErr, expected, ionized.Mean,
			ionized.StdErr, expectedIons, r.Growth.Mean)
		within(t, "attachment", attached, expected, 0.01)
		within(t, "ionization", ionized, expectedIons, 0.01)
		if d := r.Ionization.Mean - r.Loss.Mean; math.Abs(r.Growth.Mean-d) > 1e-9*r.Loss.Mean {
			t.Errorf("%g Td: growth %g, want %g", field, r.Growth.Mean, d)
		}
		if (field < 200) == (r.Growth.Mean > 0) {
			t.Errorf("%g Td: growth %g m3/s", field, r.Growth.Mean)
		}
		section := "attachment in silane"
		validation.Record(t, gasRows, *update, validation.Row{
			Section: section, Quantity: fmt.Sprintf("%g Td, attachment rate coefficient", field),
			Unit: "m3/s", Reference: expected, ReferenceError: 0.01 * expected,
			Source: "integral of M. Kurachi and Y. Nakamura's cross section over the distribution",
			Status: "computed", Ours: attached.Mean, OursError: attached.StdErr, Limit: 4,
			LimitKind: validation.Sigma, Seed: swarmSeed,
		})
	}
}

func within(t *testing.T, what string, got stats.Estimate, want, part float64) {
	t.Helper()
	if math.Abs(got.Mean-want) > 4*math.Hypot(got.StdErr, part*want) {
		t.Errorf("%s: %.4g +- %.2g, want %.4g", what, got.Mean, got.StdErr, want)
	}
}

// overDistribution is the mean of sigma v over the measured energy distribution [m3/s].
func overDistribution(r *SwarmResult, table *crosssections.Table) float64 {
	sum := 0.0
	const parts = 40
	for bin, f := range r.Energies.EEPF {
		from, to := r.Energies.EdgesEV[bin], r.Energies.EdgesEV[bin+1]
		for k := range parts {
			e := from + (to-from)*(float64(k)+0.5)/parts
			sum += f * e * table.At(e) * (to - from) / parts
		}
	}
	return sum * math.Sqrt(2*phys.ElementaryCharge/phys.ElectronMass)
}

// Goal: what a hard hit leaves to the target is reported with the target's momentum. Method: all
// recoils of a heavy beam, momentum of the pair.
func TestRecoilKeepsMomentum(t *testing.T) {
	const mass = 30 * phys.AtomicMass
	for _, kind := range []crosssections.Kind{crosssections.Isotropic, crosssections.Backscatter} {
		sigma := inverseSpeed(1e9, testDensity, mass)
		b := background(20*phys.AtomicMass, 300, process("p", "X+", kind, 0, tabulate(0, 100, sigma)))
		set := Settings{
			Projectile: "X+", Mass: mass, Unit: testUnit, TimeStep: 1e-10, TopEnergy: 100, Recoil: 1e-9,
		}
		m, err := NewModel(set, []Background{b})
		if err != nil {
			t.Fatal(err)
		}
		s := stream(44)
		for range 100 {
			got := single(m, s, tilted().scale(speedOf(30, mass)))
			if len(got.made) != 1 || got.made[0].Product != Recoil {
				t.Fatalf("%v: made %+v", kind, got.made)
			}
			off := got.before.scale(30).add(20, got.target).add(-30, got.after).
				add(-20, vector(got.made[0].V))
			if off.norm() > 1e-10*got.before.norm()*30 {
				t.Fatalf("%v: momentum off by %g", kind, off.norm())
			}
		}
	}
}
