package run

import (
	"errors"
	"fmt"
	"math"

	"ionfall/internal/phys"
	"ionfall/internal/stats"
	"ionfall/pic"
)

// ErrTarget says that no voltage up to the limit gave the power, current or self-bias asked for.
// The results of the run at the limit are kept.
var ErrTarget = errors.New("the target is out of reach")

// A reactor settles more slowly than its plasma: a blocking capacitor is charged by the small
// difference of ion and electron current, and the voltage that gives a power has to be found. While
// the run settles, both are steered: the bias by what flowed, the amplitude by what was measured.
// At the end they are left alone, long before anything is averaged. The steady state is that of the
// circuit alone: steering stops where no direct current flows.
//
// The electrons that reach the electrode grow with the least voltage of its sheath as exp(-V/Te),
// the ions hardly change. When the bias moves, the two sheaths share it by their charges: with
// voltages as squares of charges and a largest voltage Vm, the least one, about the floating
// voltage Vf = 5 Te, moves by sqrt(Vf/Vm) of it only. So the bias that lets as many electrons
// arrive as ions is about U ln(ions/electrons) away, with U = Te sqrt(Vm/Vf).
const (
	steerEV = 3 // about Te [eV]
	// biasStep bounds a step of the bias, ampStep one of ln(amplitude).
	biasStep, ampStep = 0.2, 0.15
	// ampGain is the part of a deviation that a step takes away.
	ampGain = 0.7
	// coarseCounts and fineCounts are the particles at the electrode that a step waits for, for
	// coarseWait or fineWait periods at most.
	coarseCounts, fineCounts = 100, 600
	coarseWait, fineWait     = 20, 100
	leastWait                = 4
	// fineSteps with gains 1, 1/2, 1/3 ... average the chance of all of them.
	fineSteps = 8
	// firstSteer is when the start's own transient has gone [periods].
	firstSteer = 20
	// mostSteps bounds the search; from then on the trust checks tell.
	mostSteps = 400
	// limitSteps at the limit, short of the target, show that it is out of reach.
	limitSteps = 8
	// leastAmplitude keeps the search from putting the discharge out [V].
	leastAmplitude = 20
	// closeToTarget is the deviation of its logarithm from which the fine steps start.
	closeToTarget = 0.1
)

// reactorControl is the state of the steering.
type reactorControl struct {
	Built     float64    // sum of amplitudes that the simulation was built for [V]; 0 without a target
	Amplitude float64    // in use [V]
	Since     int        // periods since the last step
	Plus      float64    // elementary charges that made the electrode more positive since then, ...
	Minus     float64    // ... and more negative
	Rise      float64    // last step of the bias [V]
	Seen      [2]float64 // Plus and Minus of all fine steps
	Steps     int
	Fine      int     // number of the fine step that comes next, or 0
	LogSum    float64 // of ln(amplitude) over the fine steps
	AtLimit   int
	Done      bool
	Unreached bool
}

// biasFree tells whether a capacitor, a layer or a floating wafer lets a direct voltage build up.
func (p *Plan) biasFree() bool {
	c := p.bare()
	return c.Network.Capacitance > 0 && !c.CurrentDrive
}

// steer ends a period for the meter and, while the run settles, steers the reactor.
func (m *machine) steer(l *pic.Ledger) error {
	m.meter.EndPeriod()
	c, r := &m.control, &m.control.Reactor
	targeted := m.plan.Case.Drive.Targeted()
	if r.Done || !m.plan.biasFree() && !targeted || c.Stage == StageAveraging || c.Stage == StageDone {
		return nil
	}
	if c.SimPeriods <= firstSteer && c.Stage == StagePilot {
		return nil
	}
	r.count(l, m.sim.Species())
	fine := c.Stage == StageSettling && !c.Projecting && r.Fine > 0
	if c.Stage == StageSettling && !c.Projecting {
		c.StagePeriods = 0 // nothing is undisturbed yet
	}
	if !m.steerNow(fine, targeted) {
		return nil
	}
	near := true
	if m.plan.biasFree() {
		near = m.steerBias(fine) && near
	}
	if targeted {
		ok, err := m.steerAmplitude(fine)
		if err != nil {
			return err
		}
		near = near && ok
	}
	if !fine {
		r.Seen = [2]float64{}
	} else {
		r.Seen[0], r.Seen[1] = r.Seen[0]+r.Plus, r.Seen[1]+r.Minus
	}
	r.Since, r.Plus, r.Minus = 0, 0, 0
	r.Steps++
	switch {
	case c.Stage != StageSettling || c.Projecting:
		r.Fine = 0
	case fine && r.Fine >= fineSteps, r.Steps > mostSteps, r.AtLimit > limitSteps:
		r.Done = true
		r.Unreached = r.AtLimit > limitSteps
	case near:
		r.Fine++
	default:
		r.Fine = 0
	}
	return nil
}

// count adds what reached the powered electrode in a period.
func (r *reactorControl) count(l *pic.Ledger, species []pic.Species) {
	r.Since++
	r.Plus += float64(l.Species[0].Emitted[pic.Powered])
	for i := range l.Species {
		if q := float64(species[i].Charge) * float64(l.Species[i].Absorbed[pic.Powered]); q > 0 {
			r.Plus += q
		} else {
			r.Minus -= q
		}
	}
}

// steerNow tells whether enough was seen for a step. The density answers a change of the amplitude
// over the time an ion stays: fine steps of it wait for a part of that.
func (m *machine) steerNow(fine, targeted bool) bool {
	r := &m.control.Reactor
	if !fine {
		return r.Since >= leastWait && r.Plus+r.Minus >= coarseCounts || r.Since >= coarseWait
	}
	least := 5.0
	if targeted {
		least = math.Max(least, m.control.Residence/15)
	}
	return float64(r.Since) >= least && (r.Plus+r.Minus >= fineCounts || r.Since >= fineWait)
}

// steerVoltage returns U: Te if the sheaths are not larger than the floating voltage.
func (m *machine) steerVoltage() float64 {
	return steerEV * math.Sqrt(math.Max(1, m.plan.largestVoltage()/(5*steerEV)))
}

// steerBias moves the bias towards the value without direct current; true if it is close.
func (m *machine) steerBias(fine bool) bool {
	r := &m.control.Reactor
	ratio := math.Log((r.Plus + 2) / (r.Minus + 2))
	step := m.steerVoltage() * ratio
	if fine {
		m.sim.ShiftBias(step / float64(r.Fine))
		return math.Abs(ratio) < 1
	}
	if math.Abs(ratio) > 1 && ratio*r.Rise > 0 {
		step = math.Copysign(math.Max(math.Abs(step), 2*math.Abs(r.Rise)), step) // still far away
	}
	largest := biasStep * m.plan.largestVoltage()
	step = math.Max(-largest, math.Min(largest, step))
	r.Rise = step
	m.sim.ShiftBias(step)
	return math.Abs(ratio) < 0.5+3*math.Sqrt(1/(r.Plus+2)+1/(r.Minus+2))
}

// biasError is the standard error of the self-bias that its scatter over the average does not show
// [V]. Three chances have a memory that is long against it:
//
//	the counts in the fine steps of the steering, which the circuit takes away slowly;
//	single charges that arrive: on a capacitance C the bias wanders with the variance e W U/C and
//	the memory C U/J of an ion current density J;
//	the ions before the two electrodes, whose numbers part by 1/sqrt(n) of all n and come together
//	again within a quarter of the time that an ion stays: the ratio eps of the sheaths' voltages
//	and with it the bias follow, d eta/d ln eps = eps Vpp/(1 + eps)^2.
//
// Three or four runs each of four cases in argon scattered by 0.45 to 0.66 V where this gives 0.7
// V.
func (m *machine) biasError() float64 {
	r, c := &m.control.Reactor, m.sim.Config()
	capacitance := c.Network.Capacitance
	n := float64(m.control.Averaged.Periods)
	if r.Seen[0] == 0 || r.Seen[1] == 0 || capacitance == 0 || n == 0 {
		return 0
	}
	u := m.steerVoltage()
	steering := u * math.Sqrt(1/r.Seen[0]+1/r.Seen[1])
	charge := phys.ElementaryCharge * c.Weight
	flux := stats.Mean(m.series(func(r *Row) float64 { return r.Flux[0] }, int(n))).Mean
	period := flux * m.plan.period() // ions of a period [1/m2]
	single := math.Sqrt(charge * u / capacitance * remembered(
		capacitance*u/(phys.ElementaryCharge*period)/n))
	eps := m.rec.SheathVoltageRatio().Mean
	ions := float64(m.history[len(m.history)-1].Ions)
	steered := (r.Seen[0] + r.Seen[1]) / 2 * c.Weight / period // periods
	parted := eps * m.meter.PeakToPeak(int(n)).Mean / ((1 + eps) * (1 + eps)) *
		math.Sqrt(remembered(m.control.Residence/4/steered)/ions)
	return math.Sqrt(steering*steering + single*single + parted*parted)
}

// remembered is the variance of the mean of a process over a time, in its own variance, for the
// memory q in that time (Ornstein-Uhlenbeck).
func remembered(q float64) float64 { return 2 * q * (1 - q*(1-math.Exp(-1/q))) }

// guessBias sets the bias of a cold start: that of the two sheaths with the voltage ratio
// eps = (area ratio)^-1.5, eta = -(Vmax + eps Vmin)/(1 + eps). Steering corrects it.
//
// Ref: B. G. Heil, U. Czarnetzki, R. P. Brinkmann and T. Mussenbrock, J. Phys. D 41, 165202 (2008)
// (formula from memory).
func (m *machine) guessBias() {
	if !m.plan.biasFree() {
		return
	}
	m.sim.ShiftBias(m.plan.asymmetryBias(math.Pow(m.plan.Case.Geometry.AreaRatio, -1.5)))
}

// asymmetryBias returns the self-bias of the drive for the ratio eps of grounded to powered sheath
// voltage [V].
func (p *Plan) asymmetryBias(eps float64) float64 {
	const points = 2048
	d := p.drive()
	low, high := math.Inf(1), math.Inf(-1)
	for i := range points {
		v := d.At(float64(i)/points) - d.Bias
		low, high = math.Min(low, v), math.Max(high, v)
	}
	return -(high + eps*low) / (1 + eps)
}

// target returns what is sought, its measure over the last n periods, and the exponent with which
// it grows with the amplitude.
func (m *machine) target(n int) (want float64, is stats.Estimate, exponent float64, name string) {
	d, area := &m.plan.Case.Drive, m.plan.area()
	switch {
	case d.Power.Given():
		power := m.series(func(r *Row) float64 { return r.TotalPower }, n)
		return d.Power.PerArea(area), stats.Mean(power), 2, "power"
	case d.Current.Given():
		return d.Current.PerArea(area), m.meter.RMS(n), 1, "current"
	}
	return d.SelfBias, m.meter.SelfBias(n), 1, "self-bias"
}

// steerAmplitude moves the amplitude so that the target is held; true if it is close. What the
// density does to power and current is followed; in the end the amplitude is the mean over the fine
// steps, through which the target was held.
func (m *machine) steerAmplitude(fine bool) (bool, error) {
	c, r := &m.control, &m.control.Reactor
	// The period in which the amplitude changed charged the sheaths, too.
	want, is, exponent, _ := m.target(r.Since - 1)
	off := 1.0 // of the wrong sign: far below
	if is.Mean/want > 0 {
		off = math.Log(want / is.Mean)
	}
	step := math.Max(-ampStep, math.Min(ampStep, ampGain*off/exponent))
	limit := m.plan.Case.Drive.Limit()
	was := m.amplitude()
	now := math.Max(math.Min(leastAmplitude, limit), math.Min(limit, was*math.Exp(step)))
	if now == limit && off > 0.02 && (c.Stage == StageSettling || c.Round.Number > 1) {
		r.AtLimit++
	} else {
		r.AtLimit = 0
	}
	if c.Projecting && math.Abs(step) > 0.05 {
		c.Round.Doubled = 0 // the growth that is seen follows the amplitude
	}
	if !fine {
		r.LogSum = 0
	} else if r.LogSum += math.Log(now); r.Fine == fineSteps {
		now = math.Exp(r.LogSum / fineSteps)
	}
	r.Amplitude, m.plan.amplitude = now, now
	return math.Abs(off) < closeToTarget, m.sim.SetDrive(m.plan.drive())
}

// amplitude is the sum of amplitudes in use [V].
func (m *machine) amplitude() float64 {
	sum := 0.0
	for _, t := range m.plan.drive().Tones {
		sum += t.Amplitude
	}
	return sum
}

// builtFor returns the amplitude that a simulation is to be built for: that in use, or for a
// continued run that of the simulation which is being restored.
func (m *machine) builtFor() float64 {
	r := &m.control.Reactor
	if m.sim != nil {
		r.Built = r.Amplitude
	}
	return r.Built
}

// resumeDrive gives a restored simulation the amplitude in use.
func (m *machine) resumeDrive(s *pic.Simulation) error {
	r := &m.control.Reactor
	if !m.plan.Case.Drive.Targeted() || r.Amplitude == 0 {
		return nil
	}
	m.plan.amplitude = r.Amplitude
	return s.SetDrive(m.plan.drive())
}

// targetError tells that the target was out of reach, and what was reached.
func (m *machine) targetError() error {
	if !m.control.Reactor.Unreached {
		return nil
	}
	want, is, _, name := m.target(m.control.Averaged.Periods)
	unit := map[string]string{"power": "W/m2", "current": "A/m2", "self-bias": "V"}[name]
	return fmt.Errorf("%w: %s of %.4g %s asked for, %.4g +- %.2g %s reached at the voltage limit of "+
		"%.4g V; the results there are kept in %s", ErrTarget, name, want, unit, is.Mean, is.StdErr,
		unit, m.plan.Case.Drive.Limit(), m.folder.Dir())
}
