package pic

import (
	"fmt"
	"math"
	"testing"

	"ionfall/internal/phys"
	"ionfall/internal/rng"
	"ionfall/internal/stats"
	"ionfall/internal/validation"
)

// reservoir is a collisionless half space before an isolated wall at x = 0. The plane x = L, at
// potential 0, sends in half of a Maxwellian of electrons and a cold beam of ions, faster than
// sound; what comes back through it is lost. All the electrons that do not get over the wall's
// potential come back, so that with the fluxes Ge and Gi of the plane the exact solution is
//
//	eta = -e phi[0]/Te = ln(Ge/Gi)
//
// whatever the form of the sheath, as long as the potential is monotonic. The plane itself is
// neutral: Gi/u0 = (1 + erf sqrt eta)/2 nM, with nM = Ge sqrt(2 pi m/Te) the density of the whole
// Maxwellian. With nM for the ion density and the sound speed for u0 this is the textbook's
// eta = ln sqrt(M/(2 pi m)).
//
// Refs: L. A. Schwager and C. K. Birdsall, Phys. Fluids B 2, 1057 (1990), for such a set-up;
// P. C. Stangeby, The Plasma Boundary of Magnetic Fusion Devices (2000), ch. 2; the limit u0 = cs:
// D. Bohm, in The Characteristics of Electrical Discharges in Magnetic Fields (1949).
type reservoir struct {
	scheme    Scheme
	electron  float64 // temperature [eV]
	ratio     float64 // M/m
	mach      float64 // u0 over the sound speed sqrt(Te/M)
	density   float64 // at the plane [1/m3]
	sent      [2]float64
	owed      [2]float64
	potential []float64 // of the wall, means of stretches [V]
	charge    []float64 // of the wall, means of stretches [C/m2]
	hits      [2]float64
	energy    [2]float64 // of what hit the wall, sum [eV]
	layer     float64    // capacitance of a dielectric over that of the empty gap; 0 for none
}

const reservoirEvery = 8 // steps a move of the ions

// eta solves the potential and returns it with the density of the whole Maxwellian.
func (r *reservoir) eta() (eta, maxwell float64) {
	thermal := math.Sqrt(r.ratio/(2*math.Pi)) / r.mach
	for range 100 {
		eta = math.Log(thermal / (0.5 * (1 + math.Erf(math.Sqrt(math.Max(eta, 1))))))
	}
	return eta, r.density / (0.5 * (1 + math.Erf(math.Sqrt(eta))))
}

// sheet returns the exact charge on the wall [C/m2] from the balance of momentum:
//
//	eps0 E^2/2 = M Gi (v - u0) + p(wall) - p(plane)
//
// with the ions' speed v at the wall and the electrons' pressure nM Te ((1 + erf y)/2 -
// y exp(-y^2)/sqrt pi), y^2 = eta, at the plane and nM Te exp(-eta)/2 at the wall.
func (r *reservoir) sheet() float64 {
	eta, maxwell := r.eta()
	te := r.electron * phys.ElementaryCharge
	y := math.Sqrt(eta)
	ions := r.density * te * r.mach * (math.Sqrt(r.mach*r.mach+2*eta) - r.mach)
	plane := maxwell * te * (0.5*(1+math.Erf(y)) - y*math.Exp(-eta)/math.Sqrt(math.Pi))
	wall := maxwell * te * math.Exp(-eta) / 2
	return -math.Sqrt(2 * phys.Epsilon0 * (ions + wall - plane))
}

// build makes the run, 25 Debye lengths long, filled with a uniform plasma.
func (r *reservoir) build(t *testing.T) *Simulation {
	t.Helper()
	const cells, perCell, debyeCells, phase = 100, 150, 4, 0.1
	te := r.electron * phys.ElementaryCharge
	debye := math.Sqrt(phys.Epsilon0 * r.electron / (r.density * phys.ElementaryCharge))
	ion := Species{
		Name: "X+", Charge: 1, Mass: r.ratio * phys.ElectronMass, Every: reservoirEvery,
	}
	c := Config{
		Gap: debye * cells / debyeCells, Cells: cells, StepsPerPeriod: reservoirEvery,
		Period: reservoirEvery * phase / plasmaFrequency(r.density), Scheme: r.scheme,
		Isolated: true, Chunks: 1, Seed: 5, Species: []Species{electrons(), ion},
	}
	c.Weight = r.density * c.CellSize() / perCell
	if r.layer > 0 {
		c.Isolated = false
		c.Network.Capacitance = r.layer * c.VacuumCapacitance()
	}
	s := mustNew(t, c)
	mustLoad(t, s, 0, cells*perCell, te/phys.Boltzmann)
	mustLoad(t, s, 1, cells*perCell, 0)
	ch := &s.species[1].chunks[0]
	for k := range ch.vx {
		ch.vx[k] = -r.mach * math.Sqrt(te/ion.Mass) / c.VelocityUnit(ion.Every)
	}
	eta, maxwell := r.eta()
	flux := maxwell * math.Sqrt(te/(2*math.Pi*phys.ElectronMass))
	r.sent[0] = flux * c.TimeStep() / c.Weight
	r.sent[1] = flux * math.Exp(-eta) * c.TimeStep() / c.Weight * reservoirEvery
	return s
}

// send lets the plane emit what belongs to one step; ions right after they moved.
func (r *reservoir) send(s *Simulation, stream *rng.Stream) {
	c := &s.config
	cells := float64(c.Cells)
	te := r.electron * phys.ElementaryCharge
	spread := math.Sqrt(te/phys.ElectronMass) / c.VelocityUnit(1)
	for r.owed[0] += r.sent[0]; r.owed[0] >= 1; r.owed[0]-- {
		v := spread * math.Sqrt(2*stream.Exponential())
		x := min(cells-v*stream.Float64(), cells-0x1p-20)
		if x > 0 {
			inject(s, 0, 0, x, -v, spread*stream.Normal(), spread*stream.Normal())
		}
	}
	if !s.species[1].due(s.step - 1) {
		return
	}
	v := r.mach * math.Sqrt(te/s.species[1].Mass) / c.VelocityUnit(reservoirEvery)
	for r.owed[1] += r.sent[1]; r.owed[1] >= 1; r.owed[1]-- {
		inject(s, 1, 0, min(cells-v*stream.Float64(), cells-0x1p-20), -v, 0, 0)
	}
}

// watch collects the wall's potential and what hits it once counting is on.
func (r *reservoir) watch(s *Simulation, counting *bool) {
	watch(s, &spy{
		step: func(c Circuit) {
			if *counting {
				last := len(r.potential) - 1
				r.potential[last] += c.Voltage
				r.charge[last] += s.SurfaceCharge()
			}
		},
		hits: func(i, _ int, hits []Hit) {
			for _, h := range hits {
				if *counting && h.Wall == Powered {
					r.hits[i]++
					r.energy[i] += s.species[i].energyPer / phys.ElementaryCharge *
						(h.VX*h.VX + h.VY*h.VY + h.VZ*h.VZ)
				}
			}
		},
	})
}

// run fills the averages: 3 flights of an ion from the plane to settle, 3 to measure.
func (r *reservoir) run(t *testing.T) {
	t.Helper()
	const stretch = 200
	s := r.build(t)
	counting := false
	r.watch(s, &counting)
	stream := rng.Key{Seed: 5, Purpose: rng.Loading, Species: 7}.Stream()
	speed := r.mach * math.Sqrt(r.electron*phys.ElementaryCharge/s.species[1].Mass)
	flight := int(s.config.Gap / speed / s.config.TimeStep())
	for n := range 6 * flight / stretch * stretch {
		if counting = n >= 3*flight/stretch*stretch; counting && n%stretch == 0 {
			r.potential, r.charge = append(r.potential, 0), append(r.charge, 0)
		}
		mustAdvance(t, s, 1)
		r.send(s, &stream)
	}
	for k := range r.potential {
		r.potential[k] /= stretch
		r.charge[k] /= stretch
	}
}

// rows compares the averages with the exact solution.
func (r *reservoir) rows() []validation.Row {
	eta, _ := r.eta()
	potential, charge := stats.Mean(r.potential), stats.Mean(r.charge)
	row := func(quantity, unit string, want, got, stdErr float64) validation.Row {
		return validation.Row{
			Section: "isolated wall before a collisionless plasma", Unit: unit, Status: "exact",
			Quantity: fmt.Sprintf("%s, %v", quantity, r.scheme), Reference: want, Ours: got,
			OursError: stdErr, Limit: fourSigma, LimitKind: validation.Sigma, Seed: 5,
			Source: "kinetic solution of a Maxwellian half space with cold ions; see P. C. Stangeby, " +
				"The Plasma Boundary of Magnetic Fusion Devices (2000), ch. 2",
			Note: fmt.Sprintf("Te %g eV, M/m %g, ions enter at %g sound speeds", r.electron, r.ratio,
				r.mach),
		}
	}
	// The energy at impact of a full Maxwellian is Te (exponential) + Te (two degrees of freedom),
	// of variance 2 Te^2.
	spread := r.electron * math.Sqrt(2/r.hits[0])
	return []validation.Row{
		row("wall potential", "V", -r.electron*eta, potential.Mean, potential.StdErr),
		row("surface charge", "C/m2", r.sheet(), charge.Mean, charge.StdErr),
		// As many of both arrive but for the change of the surface charge, less than sqrt(hits).
		row("electrons that hit the wall, by ions", "", 1, r.hits[0]/r.hits[1],
			math.Sqrt(1/r.hits[0]+1/r.hits[1])),
		row("mean energy of electrons at the wall", "eV", 2*r.electron, r.energy[0]/r.hits[0], spread),
		row("mean energy of ions at the wall", "eV", r.electron*(eta+r.mach*r.mach/2),
			r.energy[1]/r.hits[1], potential.StdErr),
	}
}

// Goal: an isolated wall takes the potential and the charge of kinetic theory, no net current flows
// to it, and what hits it has the energies of theory. Method: the exact solution of the half space; the errors are
// statistical. Slow fluctuations of the potential shift its mean by var/(2 Te), 0.01 % with the
// 0.07 V that means over 20/omega_p fluctuate by; the grid of a quarter Debye length changes the
// charge by (dx/lambda_D)^2/24 = 0.3 % at most.
func TestValidationIsolatedWall(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some seconds")
	}
	for _, scheme := range schemes() {
		r := &reservoir{scheme: scheme, electron: 3, ratio: 1836, mach: 1.2, density: 1e15}
		r.run(t)
		t.Logf("%g electrons and %g ions hit the wall; textbook (ions at 1 sound speed) %.3f Te",
			r.hits[0], r.hits[1], math.Log(math.Sqrt(r.ratio/(2*math.Pi))))
		record(t, r.rows()...)
	}
}
