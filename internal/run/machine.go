package run

import (
	"context"
	"errors"
	"fmt"
	"math"
	"time"

	"ionfall/diagnostics"
	"ionfall/internal/stats"
	"ionfall/internal/store"
	"ionfall/pic"
)

// ErrInterrupted says that a run was told to stop and has written its checkpoint.
var ErrInterrupted = errors.New("interrupted")

// ErrBudget says that the budget was spent before there was anything to average.
var ErrBudget = errors.New("the budget is spent before the discharge is steady")

const (
	// segment is how long the loop may run before it looks for an interrupt.
	segment = 100 * time.Millisecond
	// checkpointEvery is the time between checkpoints.
	checkpointEvery = 3 * time.Minute
	// balanceEvery is how often chunks are evened out [periods].
	balanceEvery = 16
	// settleLook is how often the steadiness is tested while settling [periods].
	settleLook = 5
	// mostWindows ends the settling of a discharge that never stands; the trust check will say so.
	mostWindows = 20
	// mostPerElectron bounds all particles over the target of the electrons: where electrons are
	// lost and ions stay behind, more of both do not help.
	mostPerElectron = 16
	// band is the factor by which the number of electrons may leave its target.
	band = 2
)

// machine is a run in progress.
type machine struct {
	plan    *Plan
	options Options
	folder  *store.Run
	control control
	history []Row
	sim     *pic.Simulation
	rec     *diagnostics.Recorder
	meter   *diagnostics.Meter

	crew      crew
	perStep   time.Duration // of the last segment
	started   time.Time
	cpuAtOpen float64
	saved     time.Time
	shown     time.Time
}

// loop makes periods until the run is done, interrupted, or has failed.
func (m *machine) loop(ctx context.Context) error {
	m.saved = time.Now()
	for m.control.Stage != StageDone {
		if err := m.advancePeriod(ctx); err != nil {
			return err
		}
		l := m.sim.TakeLedger()
		m.rec.EndPeriod(l.Weight)
		m.account(&l)
		m.control.Periods++
		m.control.SimPeriods++
		m.control.StagePeriods++
		if err := m.steer(&l); err != nil {
			return errors.Join(err, m.save())
		}
		if err := m.decide(); err != nil {
			return errors.Join(err, m.save())
		}
		m.holdPopulation()
		m.report()
		if time.Since(m.saved) > m.options.checkpointEvery() {
			if err := m.save(); err != nil {
				return err
			}
		}
	}
	return nil
}

// advancePeriod goes to the end of the period, in segments short enough to hear an interrupt.
func (m *machine) advancePeriod(ctx context.Context) error {
	steps := int64(m.control.Numerics.StepsPerPeriod)
	for left := steps - m.sim.Step()%steps; left > 0; {
		if ctx.Err() != nil {
			if err := m.save(); err != nil {
				return err
			}
			return fmt.Errorf("%w in the %s stage, after %d periods: continue with: ionfall resume %s",
				ErrInterrupted, m.control.Stage, m.control.Periods, m.folder.Dir())
		}
		n := min(left, 16) // of a new simulation, whose speed is not known
		if m.perStep > 0 {
			n = min(left, max(1, int64(segment/m.perStep)))
		}
		begin := time.Now()
		if err := m.sim.Advance(n); err != nil {
			return err
		}
		m.perStep = max(1, time.Since(begin)/time.Duration(n))
		m.crew.watch(m.sim, m.perStep, time.Since(begin))
		left -= n
	}
	return nil
}

// decide moves the run from stage to stage; called between periods.
func (m *machine) decide() error {
	c := &m.control
	row := &m.history[len(m.history)-1]
	if row.Electrons == 0 || row.Ions == 0 {
		return m.goneOut()
	}
	if m.fixedLength() {
		m.decideFixed()
		return nil
	}
	switch c.Stage {
	case StagePilot:
		if err := m.decidePilot(row); err != nil {
			return err
		}
	case StageSettling:
		m.decideSettling(row)
	case StageAveraging:
		m.decideAveraging()
	}
	return m.checkBudget()
}

func (m *machine) fixedLength() bool { return m.plan.Case.Numerics.Periods > 0 }

// decideFixed keeps to the asked-for number of periods; called before the first, too.
func (m *machine) decideFixed() {
	whole, average := m.plan.Case.Numerics.Periods, m.plan.averagePeriods()
	switch {
	case m.control.Periods >= whole:
		m.control.Reached = true
		m.enter(StageDone)
	case m.control.Periods == whole-average:
		m.enter(StageAveraging)
		m.rec.Start(max(1, average/stats.MinBatches/2))
	}
}

// averagePeriods is the length of the average of a run of fixed length, 0 for others: as given,
// or the last quarter.
func (p *Plan) averagePeriods() int {
	n := p.Case.Numerics
	if n.AveragePeriods > 0 {
		return n.AveragePeriods
	}
	return (n.Periods + 3) / 4
}

// decidePilot projects the density until it stands, then measures for some periods, then
// goes over to the final numerics.
func (m *machine) decidePilot(row *Row) error {
	c := &m.control
	if c.Projecting {
		// From the number of ions alone.
		density := peakOverMean * row.Content / m.plan.volume()
		if (plasma{Density: density}).frequency()*m.plan.period() >
			1.5*pilotQuality.plasmaStep*float64(c.Numerics.StepsPerPeriod) {
			return m.refinePilot(density)
		}
		if m.project(row) {
			c.Projecting = false
			m.rec.Start(1)
		}
		return nil
	}
	if n, _ := m.rec.Batches(); n < stats.MinBatches {
		return nil
	}
	return m.toFinal()
}

// decideSettling projects the density once more, then waits for steadiness.
func (m *machine) decideSettling(row *Row) {
	c := &m.control
	if c.Projecting {
		if !m.project(row) {
			return
		}
		c.Projecting = false
		c.StagePeriods = 0
	}
	if c.StagePeriods < c.Window {
		return
	}
	if c.StagePeriods%settleLook != 0 {
		return
	}
	if ok, _, _ := m.steady(len(m.history) - c.Window); !ok && c.StagePeriods < mostWindows*c.Window {
		return
	}
	m.enter(StageAveraging)
	m.rec.Start(max(2, int(c.Transit/2)))
}

// decideAveraging ends the run when the asked-for errors are reached, over a time that is long
// against the memory of the discharge, and nothing drifts. Negative ions, which drift more slowly
// than errors fall, are set anew as soon as they are seen to be off.
func (m *machine) decideAveraging() {
	c := &m.control
	n, length := m.rec.Batches()
	if c.StagePeriods%length != 0 ||
		float64(c.StagePeriods) < math.Max(float64(2*c.Window), m.plan.leastLives()*c.Residence) {
		return
	}
	if c.Restarts < mostRestarts && m.negativeOff() {
		m.balanceNegative()
		c.Restarts++
		m.rec = m.newRecorder()
		m.enter(StageSettling)
		return
	}
	if n < 2*stats.MinBatches || !m.accurate() {
		return
	}
	if ok, _, name := m.steady(len(m.history) - c.StagePeriods); !ok && c.Restarts < mostRestarts {
		c.Restarts++
		c.Event = name + " drifts: the average starts again"
		m.rec = m.newRecorder()
		c.Averaged = accountTotals{}
		c.StagePeriods = 0
		m.rec.Start(length)
		return
	}
	c.Reached = true
	m.enter(StageDone)
}

const (
	// wholeLife is the accuracy from which on the average lasts for at least one residence time of an
	// ion; with a coarser one it may be shorter in proportion, down to shortestLife of it. The density
	// remembers for about that time, so that the error of a shorter average rests on what the wander
	// of the ion number is taken to be, which is good enough for a coarse answer.
	wholeLife    = 0.01
	shortestLife = 1.0 / 3
	// mostRestarts bounds how often a drifting average is thrown away.
	mostRestarts = 3
)

// leastLives is the least length of the average in residence times of an ion.
func (p *Plan) leastLives() float64 {
	want := math.Min(p.Case.Accuracy.IonEnergy, p.Case.Accuracy.IonFlux)
	return math.Max(shortestLife, math.Min(1, wholeLife/want))
}

// accurate tells whether the errors at every substrate are as small as was asked for, those that
// become smaller with time. An error from n batches is itself known to one part in sqrt(2 (n-1))
// only; an average that ends as soon as it looks small enough would end where it is underestimated.
func (m *machine) accurate() bool {
	want := m.plan.Case.Accuracy
	small := func(e stats.Estimate, part float64) bool {
		return e.StdErr*(1+1/math.Sqrt(2*float64(e.N-1))) <= part*e.Mean
	}
	for _, wall := range m.plan.substrates() {
		energy, flux := m.rec.Progress(wall)
		_, effect := m.negativeError(false)
		flux = m.withErrors(flux, effect)
		if !(small(energy, want.IonEnergy) && small(flux, want.IonFlux)) {
			return false
		}
	}
	return true
}

// checkBudget ends the run when the budget is spent.
func (m *machine) checkBudget() error {
	c := &m.control
	b := m.plan.Case.Budget
	if m.options.Budget != nil {
		b = *m.options.Budget
	}
	cpu := c.CPU + m.cpuSeconds() - m.cpuAtOpen
	if c.Stage == StageDone ||
		!(b.Periods > 0 && c.Periods >= b.Periods || b.CPU > 0 && cpu >= b.CPU) {
		return nil
	}
	c.Spent = true
	if n, _ := m.rec.Batches(); c.Stage != StageAveraging || n < stats.MinBatches {
		return fmt.Errorf("%w: in the %s stage after %d periods and %.0f s of processor time; "+
			"give a larger budget and continue with: ionfall resume %s",
			ErrBudget, c.Stage, c.Periods, cpu, m.folder.Dir())
	}
	m.enter(StageDone)
	return nil
}

func (m *machine) enter(stage string) {
	m.control.Stage = stage
	m.control.StagePeriods = 0
	if stage == StageAveraging {
		m.control.Averaged = accountTotals{}
	}
}

// holdPopulation keeps the number of electrons in its band and chunks of equal size.
func (m *machine) holdPopulation() {
	c := &m.control
	electrons, all := m.sim.Species()[0].Count(), 0
	for i := range m.sim.Species() {
		all += m.sim.Species()[i].Count()
	}
	switch {
	case m.fixedLength(): // its number of particles is part of what was asked for
	case electrons > band*c.Target:
		m.sim.Halve()
		c.Event = "every second particle removed, weight doubled"
		m.rebase()
	case electrons*band < c.Target && all < mostPerElectron*c.Target:
		m.sim.Multiply(2, 1)
		c.Event = "particles doubled, weight halved"
		m.rebase()
	}
	if c.SimPeriods%balanceEvery == 0 {
		m.sim.Balance()
	}
}
