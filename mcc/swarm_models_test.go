package mcc

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/stats"
)

// reidGas is the ramp model: a constant elastic and a linearly rising inelastic cross section.
//
// Ref: I. D. Reid, Aust. J. Phys. 32, 231 (1979) (definition from memory).
func reidGas() *crosssections.Gas {
	b := background(4*phys.AtomicMass, 0,
		process("elastic", "e", crosssections.Elastic, 0, tabulate(0, 100, constant(6e-20))),
		process("inelastic", "e", crosssections.Excitation, 0.2, rising(0.2, 10e-20, 100)))
	return b.Gas
}

// lucasSaeleeGas has a constant frequency of elastic collisions, and a part f of the inelastic
// ones ionizes.
//
// Ref: J. Lucas and H. T. Saelee, J. Phys. D 8, 640 (1975) (definition from memory).
func lucasSaeleeGas(f float64) *crosssections.Gas {
	list := []crosssections.Process{process("elastic", "e", crosssections.Elastic, 0,
		tabulate(0, 1000, func(e float64) float64 { return 4e-20 / math.Sqrt(e) }))}
	if f < 1 {
		list = append(list, process("excitation", "e", crosssections.Excitation, 15.6,
			rising(15.6, 1e-21*(1-f), 1000)))
	}
	if f > 0 {
		list = append(list, process("ionization", "e", crosssections.Ionization, 15.6,
			rising(15.6, 1e-21*f, 1000)))
	}
	return background(1e3*phys.ElectronMass, 0, list...).Gas
}

// rising is the cross section slope (E - threshold), a straight line.
func rising(threshold, slope, topEV float64) crosssections.Table {
	return crosssections.Table{
		Onset: threshold, Energy: []float64{threshold, topEV},
		CrossSection: []float64{0, slope * (topEV - threshold)},
	}
}

// modelFrequency is the collision frequency of the Maxwell models [1/s].
const modelFrequency = 2e9

// maxwellModel returns a swarm's gas with a constant collision frequency of the pair.
func maxwellModel(kind crosssections.Kind, projectile string,
	mass, target, temperature float64,
) Background {
	p := process("constant frequency", projectile, kind, 0,
		tabulate(0, 100, inverseSpeed(modelFrequency, swarmDensity, mass)))
	b := background(target, temperature, p)
	b.Density = swarmDensity
	return b
}

const maxwellSource = "G. H. Wannier, Bell Syst. Tech. J. 32, 170 (1953)"

// wannierEnergy is the mean energy [eV] in a gas with a constant frequency of isotropic
// collisions.
func wannierEnergy(mass, target, temperature, drift float64) float64 {
	return 1.5*phys.Boltzmann*temperature/phys.ElementaryCharge +
		energyOf(drift*drift, mass+target)
}

// Goal: drift and energy with a constant collision frequency, where they are known exactly.
// Method: W = q E/(mu nu) with the reduced mass mu, and m <v^2>/2 = 3/2 kT + (m+M) W^2/2.
func TestValidationMaxwellModel(t *testing.T) {
	const nu, temperature = modelFrequency, 300
	ion := 40 * phys.AtomicMass
	for _, c := range []struct {
		section, projectile string
		kind                crosssections.Kind
		mass, target, drift float64
	}{
		{
			"Maxwell model, electrons", "e", crosssections.Elastic, phys.ElectronMass,
			100 * phys.ElectronMass, 3e4,
		},
		{"Maxwell model, ions in their parent gas", "X+", crosssections.Isotropic, ion, ion, 500},
		{"Maxwell model, light ions", "X+", crosssections.Isotropic, 2 * phys.AtomicMass, ion, 800},
	} {
		b := maxwellModel(c.kind, c.projectile, c.mass, c.target, temperature)
		if c.kind == crosssections.Isotropic {
			b.Gas.IonNeutral[0].Frame = crosssections.Lab // as the table was made
		}
		mu := c.mass * c.target / (c.mass + c.target)
		set := exactly(SwarmSettings{
			Projectile: c.projectile, Mass: c.mass, Field: fieldFor(c.drift*nu*mu/c.mass, c.mass),
		})
		r := mustSwarm(t, set, b)
		t.Logf("%+v", r.Run)
		record(t,
			exactRow(c.section, "drift velocity", "m/s", maxwellSource, c.drift, r.FluxDrift),
			exactRow(c.section, "mean energy", "eV", maxwellSource,
				wannierEnergy(c.mass, c.target, temperature, c.drift), r.MeanEnergy))
	}
}

// Goal: charge exchange alone, at a constant frequency in a cold gas. Method: every collision
// stops the ion, so that times since the last are exponential: W = q E/(M nu), <v^2> = 2 W^2,
// and the part of the ions above a speed v is exp(-v/W).
func TestValidationChargeExchange(t *testing.T) {
	const nu, drift = modelFrequency, 500.0
	mass := 40 * phys.AtomicMass
	b := maxwellModel(crosssections.Backscatter, "X+", mass, mass, 0)
	b.Gas.IonNeutral[0].Frame = crosssections.Lab
	r := mustSwarm(t, exactly(SwarmSettings{
		Projectile: "X+", Mass: mass, Field: fieldFor(drift*nu, mass),
	}), b)
	const section = "charge exchange at constant frequency"
	const source = "exponential distribution of times between collisions"
	record(t,
		exactRow(section, "drift velocity", "m/s", source, drift, r.FluxDrift),
		exactRow(section, "mean energy", "eV", source, energyOf(2*drift*drift, mass),
			r.MeanEnergy),
		exactRow(section, "longitudinal diffusion times density", "1/(m s)", source,
			drift*drift/nu*swarmDensity, r.DiffusionLongitudinal))
	// Collisions at the ends of steps make velocities (k+1/2) a dt: exactly exp(-k nu dt) of them
	// lie at k or more, and 1/2 + v/(a dt) of the edge of a bin, rounded down, is such a k.
	gain := drift * nu * r.Run.TimeStep
	for _, part := range []float64{1, 2, 4} {
		edge := int(math.Round(swarmBins * part * drift / speedAt(r.Run.TopEnergy, mass)))
		k := math.Floor(0.5 + speedAt(r.Energies.EdgesEV[edge], mass)/gain)
		tail := 0.0
		for i := edge; i < swarmBins; i++ {
			tail += r.Energies.EEPF[i] * binVolume(&r, i)
		}
		// An ion is a new one after two of its mean times between collisions.
		independent := float64(r.Run.Particles) * r.Run.Measured * nu / 2
		p := math.Exp(-k * nu * r.Run.TimeStep)
		record(t, exactRow(section, fmt.Sprintf("part of the ions above about %g W", part), "",
			source, p, stats.Estimate{Mean: tail, StdErr: math.Sqrt(p * (1 - p) / independent)}))
	}
}

// Goal: a constant elastic cross section in a cold gas gives the distribution of Druyvesteyn.
// Method: f ~ exp(-a E^2), a = 3 (m/M)/(e E lambda)^2, for m/M = 1/4000, where
// the two-term solution is exact to the order of m/M; its moments are gamma functions.
//
// Ref: M. J. Druyvesteyn and F. M. Penning, Rev. Mod. Phys. 12, 87 (1940).
func TestValidationDruyvesteyn(t *testing.T) {
	if !*validate {
		t.Skip("slow to relax")
	}
	const sigma, field, ratio = 6e-20, 0.5, 4000.0
	const section = "Druyvesteyn: constant elastic cross section, cold gas"
	const source = "M. J. Druyvesteyn and F. M. Penning, Rev. Mod. Phys. 12, 87 (1940)"
	b := background(ratio*phys.ElectronMass, 0,
		process("elastic", "e", crosssections.Elastic, 0, tabulate(0, 100, constant(sigma))))
	b.Density = swarmDensity
	set := exactly(SwarmSettings{Projectile: "e", Field: field})
	set.RelativeError, set.Step, set.MaxSteps = 0.003, 0.1, 2_000_000
	r := mustSwarm(t, set, b)
	t.Logf("%+v", r.Run)
	free := field * townsend / sigma // e E lambda [eV]
	scale := free * math.Sqrt(ratio/3)
	mean := scale * math.Gamma(1.25) / math.Gamma(0.75)
	drift := math.Pow(ratio, -0.25) *
		math.Sqrt(free*phys.ElementaryCharge/phys.ElectronMass) * druyvesteynDrift()
	record(t,
		exactRow(section, "mean energy", "eV", source, mean, r.MeanEnergy),
		exactRow(section, "drift velocity", "m/s", source, drift, r.FluxDrift))
	density := func(e float64) float64 {
		return 2 / math.Gamma(0.75) * math.Sqrt(e/scale) * math.Exp(-e*e/(scale*scale)) / scale
	}
	record(t, eepfRows(section, source, &r, []float64{0.1, 0.5, 1, 1.5, 2.5},
		func(from, to float64) float64 {
			return quad.Fixed(density, from, to, 8, quad.Legendre{}, 1)
		})...)
}

// druyvesteynDrift is W (M/m)^(1/4)/sqrt(e E lambda/m): the two-term drift velocity
// (-e E lambda/3) sqrt(2/m) int E f' dE, for f ~ exp(-(E/b)^2), b = e E lambda sqrt(M/(3 m)).
func druyvesteynDrift() float64 {
	// int E (2E/b^2) exp(-E^2/b^2) dE = b sqrt(pi)/2; norm int sqrt(E) exp dE = b^1.5 Gamma(3/4)/2.
	return math.Sqrt2 / 3 * math.Sqrt(math.Pi) / math.Gamma(0.75) * math.Pow(3, 0.25)
}

// Goal: observed in the middle of a step, the swarm errs by the square of the step, and by no
// more than that. Method: with a constant frequency nu of stopping collisions the velocity after
// collisions is (V + a dt) exp(-nu dt), so that its mean in the middle of the step is
// (a/nu) (nu dt/2) coth(nu dt/2) exactly: 2 % above W for a step of 0.5.
func TestSwarmStepError(t *testing.T) {
	const nu, drift, step = modelFrequency, 500.0, 0.5
	mass := 40 * phys.AtomicMass
	b := maxwellModel(crosssections.Backscatter, "X+", mass, mass, 0)
	b.Gas.IonNeutral[0].Frame = crosssections.Lab
	r := mustSwarm(t, SwarmSettings{
		Projectile: "X+", Mass: mass, Field: fieldFor(drift*nu, mass), Step: step,
		RelativeError: 0.001, Seed: 1,
	}, b)
	want := drift * step / 2 / math.Tanh(step/2)
	bound := 5 * r.FluxDrift.StdErr
	if d := math.Abs(r.FluxDrift.Mean - want); !(d < bound) || want-drift < bound {
		t.Errorf("drift %g, want %g +- %g (and not %g)", r.FluxDrift.Mean, want, bound, drift)
	}
}

// Goal: electrons without a field come to the temperature of the gas, also where their collision
// frequency depends on their speed. Method: a gas of constant cross section, whose own motion
// counts in the rate: judged by the electrons' speed alone, the distribution would be the
// equilibrium divided by nu(v), exp(-E/kT)/sqrt(E), with a mean of kT in place of 3/2 kT.
func TestValidationThermalElectrons(t *testing.T) {
	if !*validate {
		t.Skip("slow to relax")
	}
	const temperature = 300
	b := background(200*phys.ElectronMass, temperature,
		process("elastic", "e", crosssections.Elastic, 0, tabulate(0, 10, constant(6e-20))))
	b.Density = swarmDensity
	set := exactly(SwarmSettings{Projectile: "e"})
	set.RelativeError = 0.005 // for a deviation of a third
	r := mustSwarm(t, set, b)
	record(t, exactRow("electrons without field, constant cross section", "mean energy", "kT",
		"Maxwell distribution", 1.5,
		scaled(r.MeanEnergy, phys.ElementaryCharge/(phys.Boltzmann*temperature))))
}
