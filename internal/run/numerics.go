package run

import (
	"fmt"
	"math"

	"ionfall/internal/config"
	"ionfall/internal/phys"
	"ionfall/pic"
)

// Numerics are settings that are complete: nothing is left to be chosen.
type Numerics struct {
	Cells            int
	StepsPerPeriod   int
	ParticlesPerCell int
	Scheme           string
	IonSubsteps      int
	Chunks           int
}

func (n Numerics) scheme() pic.Scheme {
	if n.Scheme == config.MomentumConserving {
		return pic.MomentumConserving
	}
	return pic.EnergyConserving
}

// plasma is what the numerics are chosen for.
type plasma struct {
	Density    float64 // largest time average [1/m3]
	ElectronEV float64 // temperature there [eV]
	Sheath     float64 // narrower of the sheaths [m]
}

func (q plasma) debye() float64 {
	return math.Sqrt(phys.Epsilon0 * q.ElectronEV / (q.Density * phys.ElementaryCharge))
}

func (q plasma) frequency() float64 {
	return phys.ElementaryCharge * math.Sqrt(q.Density/(phys.Epsilon0*phys.ElectronMass))
}

// quality is how finely a plasma is to be resolved.
type quality struct {
	plasmaStep  float64 // omega_pe dt
	debyeCells  float64 // dx/lambda_D with the energy-conserving scheme; 1/4 of it with the other
	sheathCells float64 // cells in a sheath
	ionSteps    int     // ion moves in a period of the fastest tone
	perDebye    float64 // electrons in a Debye length where the plasma is densest
	perCell     int     // particles in a cell, mean over the gap, at least
	candidates  float64 // collision candidates of an electron in a step
}

var (
	// finalQuality keeps inside the bounds of the trust checks. Against a run with twice the cells
	// and steps, bench/ has the shifts.
	finalQuality = quality{0.2, 2.5, 12, 80, 200, 100, 0.1}
	// pilotQuality is for the density within some per cent.
	pilotQuality = quality{0.35, 5, 8, 40, 50, 60, 0.3}
)

const (
	// peakOverMean is the density in the middle over its mean, of discharges that were looked at.
	peakOverMean = 1.8
	// mostPerCell keeps a bad guess of the plasma from asking for more than a machine has.
	mostPerCell = 4000

	minCells = 64 // an ion energy distribution needs the sheath, at least this finely
	maxCells = 4096
	// stepGrain divides the steps of a period, so that sub-cycling finds divisors.
	stepGrain = 16
	// chunkParticles is about how many particles a chunk is to have.
	chunkParticles = 1500
	mostChunks     = 64
)

// choose fills in what the input leaves open, for the plasma, with reasons.
func (p *Plan) choose(q plasma, want quality) (Numerics, []string) {
	given := p.Case.Numerics
	var why []string
	reason := func(name string, chosen int, text string, args ...any) {
		why = append(why, fmt.Sprintf("%s %d: ", name, chosen)+fmt.Sprintf(text, args...))
	}
	n := Numerics{
		Cells: given.Cells, StepsPerPeriod: given.StepsPerPeriod, Scheme: given.Scheme,
		ParticlesPerCell: given.ParticlesPerCell, IonSubsteps: given.IonSubsteps,
	}
	if n.Scheme == "" {
		n.Scheme = config.EnergyConserving
		why = append(why, "scheme energy_conserving: accurate with cells of several Debye lengths")
	}
	if n.Cells == 0 {
		limit := want.debyeCells
		if n.Scheme == config.MomentumConserving {
			limit /= 4
		}
		dx := math.Min(limit*q.debye(), q.Sheath/want.sheathCells)
		n.Cells = 8 * int(math.Ceil(p.Case.Gap/dx/8))
		n.Cells = min(maxCells, max(minCells, n.Cells))
		reason("cells", n.Cells, "%.2g Debye lengths of %.3g mm, %.3g cells in a sheath of %.3g mm",
			p.Case.Gap/float64(n.Cells)/q.debye(), 1e3*q.debye(),
			q.Sheath*float64(n.Cells)/p.Case.Gap, 1e3*q.Sheath)
	}
	p.chooseSteps(&n, q, want, reason)
	if n.ParticlesPerCell == 0 {
		perDebye := want.perDebye * p.Case.Gap / float64(n.Cells) / q.debye() / peakOverMean
		n.ParticlesPerCell = min(mostPerCell, max(want.perCell, int(math.Ceil(perDebye))))
		reason("particles_per_cell", n.ParticlesPerCell, "%.0f in a Debye length in the middle, "+
			"so that the noise of particles heats little (Turner 2006)",
			float64(n.ParticlesPerCell*n.Cells)*peakOverMean*q.debye()/p.Case.Gap)
	}
	n.Chunks = 1
	for n.Chunks < mostChunks && n.Cells*n.ParticlesPerCell/n.Chunks > 2*chunkParticles {
		n.Chunks *= 2
	}
	return n, why
}

func (p *Plan) chooseSteps(n *Numerics, q plasma, want quality,
	reason func(name string, chosen int, text string, args ...any),
) {
	moves := want.ionSteps * p.fastestHarmonic()
	if n.StepsPerPeriod == 0 {
		plasmaSteps := q.frequency() * p.period() / want.plasmaStep
		collisionSteps := p.largestElectronRate() * p.period() / want.candidates
		// Electrons at the energy of half the drive, of which there are few, cross two cells a
		// step at most.
		fast := math.Sqrt(phys.ElementaryCharge * p.largestVoltage() / phys.ElectronMass)
		crossSteps := 0.5 * fast * p.period() * float64(n.Cells) / p.Case.Gap
		grain := stepGrain
		if n.IonSubsteps > 0 {
			grain = n.IonSubsteps
		}
		steps := max(plasmaSteps, collisionSteps, crossSteps, float64(moves))
		n.StepsPerPeriod = grain * int(math.Ceil(steps/float64(grain)))
		reason("steps_per_period", n.StepsPerPeriod,
			"the largest need of: plasma frequency %.0f, collisions %.0f, fast electrons %.0f, "+
				"ion moves %d", plasmaSteps, collisionSteps, crossSteps, moves)
	}
	if n.IonSubsteps == 0 {
		n.IonSubsteps = 1
		for k := 2; k <= n.StepsPerPeriod/moves; k++ {
			if n.StepsPerPeriod%k == 0 {
				n.IonSubsteps = k
			}
		}
		reason("ion_substeps", n.IonSubsteps, "%d ion moves a period",
			n.StepsPerPeriod/n.IonSubsteps)
	}
}

// largestElectronRate returns the largest collision frequency of an electron [1/s].
func (p *Plan) largestElectronRate() float64 {
	most := 0.0
	for e := 0.1; e < 300; e *= 1.02 {
		speed := math.Sqrt(2 * e * phys.ElementaryCharge / phys.ElectronMass)
		rate := 0.0
		for _, b := range p.backgrounds() {
			for i := range b.Gas.Electron {
				rate += b.Density * b.Gas.Electron[i].Table.At(e) * speed
			}
		}
		most = max(most, rate)
	}
	return most
}

// firstGuess is the plasma that is expected before anything was simulated.
func (p *Plan) firstGuess() (plasma, estimate) {
	e := p.estimate()
	q := plasma{Density: e.Density, ElectronEV: e.ElectronEV, Sheath: e.Sheath}
	if p.Case.Initial.Density > 0 {
		q.Density = p.Case.Initial.Density
	}
	if t := p.Case.Initial.ElectronTemperature; t > 0 {
		q.ElectronEV = t * phys.Boltzmann / phys.ElementaryCharge
	}
	return q, e
}
