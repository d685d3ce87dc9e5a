package run

import (
	"math"
	"time"

	"ionfall/internal/progress"
)

// liveEvery is how often state.json is renewed.
const liveEvery = 2 * time.Second

// report tells the listener how far the run is.
func (m *machine) report() {
	if time.Since(m.shown) > liveEvery {
		m.shown = time.Now()
		m.clock()
		// A viewer can do without this file; the run cannot do without its results.
		if err := m.folder.WriteJSON("state.json", m.state()); err != nil {
			m.options.log().Warn("the live state was not written", "error", err)
		}
	}
	if m.options.Progress != nil {
		m.options.Progress(m.status())
	}
}

func (m *machine) status() progress.Status {
	c := &m.control
	s := progress.Status{
		Stage: c.Stage, Periods: c.Periods, Elapsed: m.elapsed(), Remaining: -1,
		EnergyErrEV: math.NaN(), FluxErr: math.NaN(),
	}
	if len(m.history) == 0 {
		return s
	}
	row := m.history[len(m.history)-1]
	s.Particles, s.Event = row.Electrons+row.Ions, c.Event
	wall := m.plan.substrates()[0]
	s.EnergyEV, s.Flux = row.Energy[wall], row.Flux[wall]
	if c.Stage == StageAveraging || c.Stage == StageDone {
		energy, flux := m.progressAt(wall)
		if !math.IsNaN(energy.Mean) {
			s.EnergyEV, s.EnergyErrEV = energy.Mean, energy.StdErr
			s.Flux, s.FluxErr = flux.Mean, flux.StdErr
		}
	}
	s.Remaining = m.remaining()
	return s
}

func (m *machine) elapsed() time.Duration {
	return time.Duration(m.control.Wall*1e9) + time.Since(m.started)
}

// remaining estimates the time to the end: errors fall as one over the root of the periods.
func (m *machine) remaining() time.Duration {
	c := &m.control
	n := m.plan.Case.Numerics.Periods
	perPeriod := m.perStep * time.Duration(c.Numerics.StepsPerPeriod)
	if n > 0 {
		return time.Duration(n-c.Periods) * perPeriod
	}
	if c.Stage == StageDone {
		return 0
	}
	least := math.Max(float64(2*c.Window), m.plan.leastLives()*c.Residence)
	if c.Stage == StageSettling && !c.Projecting {
		return time.Duration(least+math.Max(0, float64(c.Window-c.StagePeriods))) * perPeriod
	}
	if c.Stage != StageAveraging {
		return -1
	}
	need := least
	want := m.plan.Case.Accuracy
	for _, wall := range m.plan.substrates() {
		energy, flux := m.progressAt(wall)
		for _, ratio := range []float64{
			energy.StdErr / energy.Mean / want.IonEnergy, flux.StdErr / flux.Mean / want.IonFlux,
		} {
			if !math.IsNaN(ratio) {
				need = math.Max(need, float64(c.StagePeriods)*ratio*ratio)
			}
		}
	}
	return time.Duration(math.Max(0, need-float64(c.StagePeriods))) * perPeriod
}
