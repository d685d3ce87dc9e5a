package run

import (
	"math"

	"ionfall/diagnostics"
	"ionfall/internal/phys"
	"ionfall/internal/stats"
	"ionfall/pic"
)

// pilotSeed keeps the pilot's random numbers apart from those of the final simulation.
const pilotSeed = 1 << 63

// pilotAverage is about how many periods the pilot's plasma is measured over.
const pilotAverage = 2 * stats.MinBatches

// startDensity is the part of the homogeneous model's density to start from, as it tends to be
// too high.
const startDensity = 0.5

// begin sets up the first simulation of a new run.
func (m *machine) begin() error {
	q, _ := m.plan.firstGuess()
	given := m.plan.Case.Numerics
	if m.fixedLength() || given.Extrapolation == "off" {
		n, why := m.plan.choose(q, finalQuality)
		m.control.Stage, m.control.Reasons = StageSettling, why
		m.control.Window = leastSettling
		return m.startCold(n, q)
	}
	m.control.Stage, m.control.Projecting = StagePilot, true
	n := m.plan.pilotNumerics(q)
	if m.plan.Case.Initial.Density == 0 {
		q.Density *= startDensity
	}
	return m.startCold(n, q)
}

// pilotNumerics are coarse whatever the final ones are, but never finer than these.
func (p *Plan) pilotNumerics(q plasma) Numerics {
	coarse := *p
	c := *p.Case
	c.Numerics.Cells, c.Numerics.StepsPerPeriod = 0, 0
	c.Numerics.ParticlesPerCell, c.Numerics.IonSubsteps, c.Numerics.Scheme = 0, 0, ""
	coarse.Case = &c
	n, _ := coarse.choose(q, pilotQuality)
	return n
}

// startCold makes a simulation with a uniform plasma.
func (m *machine) startCold(n Numerics, q plasma) error {
	particles := n.Cells * n.ParticlesPerCell
	weight := q.Density * m.plan.volume() / float64(particles)
	s, err := m.simulation(n, weight)
	if err != nil {
		return err
	}
	temperature := m.plan.Case.Initial.ElectronTemperature
	if temperature == 0 {
		temperature = q.ElectronEV * phys.ElementaryCharge / phys.Boltzmann
	}
	if err := m.plan.fill(s, particles, temperature); err != nil {
		return err
	}
	m.adopt(s, n)
	m.guessBias()
	m.control.startRound(q.Density * m.plan.volume())
	return nil
}

// simulation assembles one for the present stage.
func (m *machine) simulation(n Numerics, weight float64) (*pic.Simulation, error) {
	p := *m.plan
	if m.control.Stage == StagePilot {
		c := *p.Case
		c.Seed ^= pilotSeed
		p.Case = &c
		q, _ := p.firstGuess()
		p.haste = p.pilotHaste(q.ElectronEV)
	}
	p.amplitude = m.builtFor()
	return p.assemble(n, weight)
}

// adopt makes s the present simulation.
func (m *machine) adopt(s *pic.Simulation, n Numerics) {
	m.crew = newCrew(s, m.options.cores())
	m.sim = s
	m.rec = m.newRecorder()
	m.control.Numerics, m.control.SimPeriods = n, 0
	m.control.Target = n.Cells * n.ParticlesPerCell
	m.control.StagePeriods, m.control.Negative = 0, nil
	m.perStep = 0
	m.rebase()
}

// newRecorder returns a recorder that observes the present simulation, instead of any before.
func (m *machine) newRecorder() *diagnostics.Recorder {
	periods := m.plan.averagePeriods()
	if m.control.Stage == StagePilot {
		periods = pilotAverage
	}
	r := diagnostics.New(m.sim, m.plan.Case.IonEnergyThresholds, periods)
	m.meter = m.newMeter()
	m.sim.SetObservers(r, m.meter)
	return r
}

// refinePilot goes on with shorter steps, since the density turned out higher than guessed.
func (m *machine) refinePilot(density float64) error {
	was := m.sim
	q, _ := m.plan.firstGuess()
	q.Density = density
	n := m.plan.pilotNumerics(q)
	n.Cells, n.ParticlesPerCell, n.Chunks = m.control.Numerics.Cells,
		m.control.Numerics.ParticlesPerCell, m.control.Numerics.Chunks
	s, err := m.simulation(n, was.Config().Weight)
	if err != nil {
		return err
	}
	s.Transfer(was, 1)
	m.adopt(s, n)
	m.control.Event = "steps shortened for a higher density"
	return nil
}

// toFinal chooses the final numerics from what the pilot measured and takes its state over.
func (m *machine) toFinal() error {
	q := m.measured()
	m.control.Transit = m.transit()
	m.control.Window = max(leastSettling, int(math.Ceil(transitsToSettle*m.control.Transit)))
	n, why := m.plan.choose(q, finalQuality)
	m.control.Reasons = why
	m.control.Stage = StageSettling
	was := m.sim
	s, err := m.simulation(n, was.Config().Weight)
	if err != nil {
		return err
	}
	target := n.Cells * n.ParticlesPerCell
	copies := max(1, int(math.Round(float64(target)/float64(was.Species()[0].Count()))))
	s.Transfer(was, copies)
	m.adopt(s, n)
	m.control.Event = "final numerics"
	m.control.Projecting = true
	m.control.Round.Number, m.control.Round.Doubled = 1, 2 // no transient is to be expected
	m.control.startRound(m.history[len(m.history)-1].Content)
	return nil
}

// measured returns the plasma that the pilot saw.
func (m *machine) measured() plasma {
	return plasma{
		Density:    m.rec.PeakDensity().Mean,
		ElectronEV: m.rec.CenterTemperatureEV().Mean,
		Sheath: math.Min(m.rec.Sheath(pic.Powered).Mean,
			m.rec.Sheath(pic.Grounded).Mean),
	}
}

// transit returns the time that ions take through the sheath [periods]: those in it over those
// that leave it, the longer of both sheaths.
func (m *machine) transit() float64 {
	longest := 0.0
	for _, wall := range []pic.Wall{pic.Powered, pic.Grounded} {
		content := m.rec.IonsWithin(wall, m.rec.Sheath(wall).Mean)
		flux := stats.Mean(m.series(func(r *Row) float64 { return r.Flux[wall] }, 20)).Mean
		if flux > 0 {
			c := m.sim.Config()
			longest = math.Max(longest, content/(flux*c.WallArea(wall))/m.plan.period())
		}
	}
	return longest
}

// series returns a quantity over the last n periods.
func (m *machine) series(f func(r *Row) float64, n int) []float64 {
	from := max(0, len(m.history)-n)
	var list []float64
	for i := range m.history[from:] {
		list = append(list, f(&m.history[from+i]))
	}
	return list
}
