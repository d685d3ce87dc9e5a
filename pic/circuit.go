package pic

import (
	"fmt"
	"math"

	"ionfall/internal/phys"
)

// The potential of the powered electrode follows from what connects it to the grounded one.
//
//	direct     phi[0] = V(t), whatever current that takes
//	network    a capacitor, a resistance and an inductance in series with the voltage V(t)
//	current    the drive is a current J(t) without a constant part
//	isolated   no current
//
// The surface charge sigma of the electrode changes by the current of the circuit, whose integral
// is Q, and by what the electrode absorbs less what it emits. Gauss's law at the wall reads
//
//	eps0 Face[0] (phi[0]-phi[1])/dx = sigma + q[0]
//
// with q[j] the charge at node j, all per area of the powered electrode. With u[j] the potential of
// the empty gap with 1 V at x = 0 and Cv its capacitance,
//
//	Cv phi[0] = sigma + sum over j of q[j] u[j]
//
// The loop L Q” + R Q' + Q/C = V - phi[0] is taken at the time of the potential, with
// Q' = (3 Q - 4 Q1 + Q2)/(2 dt) and the same operator twice for Q”: a0 Q = V - phi[0] - K with K
// from earlier Q. Both equations together give phi[0] in one step. They are stable for any step;
// the resonance of L with the gap must be resolved.
//
// Ref: J. P. Verboncoeur, M. V. Alves, V. Vahedi and C. K. Birdsall, J. Comput. Phys. 104, 321
// (1993).

// Network is what connects the drive with the powered electrode, in series, per area of it. The
// zero value is a wire.
type Network struct {
	Capacitance float64 // of the blocking capacitor [F/m2]; 0 for none, a wire
	Resistance  float64 // [ohm m2]
	Inductance  float64 // [H m2]
}

func (n Network) wire() bool { return n == Network{} }

// connection is how the powered electrode is connected.
type connection int

const (
	direct connection = iota
	network
	current
	isolated
)

func (c *Config) connection() connection {
	switch {
	case c.Isolated:
		return isolated
	case c.CurrentDrive:
		return current
	case !c.Network.wire():
		return network
	}
	return direct
}

func (c *Config) checkCircuit() error {
	n := c.Network
	for _, v := range []float64{n.Capacitance, n.Resistance, n.Inductance} {
		if !(v >= 0) || math.IsInf(v, 0) {
			return fmt.Errorf("pic: network %+v, want values of 0 or more", n)
		}
	}
	if d := c.Drive; d.Gate != 0 && !(d.Ramp > 0 && d.Gate > 0 && d.Gate <= 1) {
		return fmt.Errorf("pic: pulses on for the part %g with ramps of %g, want 0 to 1, above 0",
			d.Gate, d.Ramp)
	}
	switch {
	case c.Isolated && (c.Drive.Bias != 0 || len(c.Drive.Tones) > 0):
		return fmt.Errorf("pic: an isolated electrode has no drive")
	case (c.Isolated || c.CurrentDrive) && !n.wire():
		return fmt.Errorf("pic: a network needs a voltage that drives it")
	case c.CurrentDrive && c.Drive.Bias != 0:
		return fmt.Errorf("pic: a current drive has no constant part")
	}
	return nil
}

// historyLength is how many earlier Q the loop needs.
const historyLength = 4

// loop holds the coefficients of the loop equation for the time step; its state is in the workers,
// as each of them finds the potential.
type loop struct {
	a        [historyLength + 1]float64 // a0 .. a4 [m2/F]
	vacuum   float64                    // Cv [F/m2]
	of       []float64                  // influence of the nodes, times scale
	scale    float64
	byCharge bool // phi[0] follows from the charge
}

func newLoop(c *Config) loop {
	l := loop{vacuum: c.VacuumCapacitance(), byCharge: c.connection() != direct}
	l.of, l.scale = influence(c)
	dt := c.TimeStep()
	ind, res := c.Network.Inductance/(dt*dt), c.Network.Resistance/dt
	l.a = [...]float64{
		2.25*ind + 1.5*res, -6*ind - 2*res, 5.5*ind + 0.5*res, -2 * ind, 0.25 * ind,
	}
	if c.Network.Capacitance > 0 {
		l.a[0] += 1 / c.Network.Capacitance
	}
	return l
}

// circuitState is the state of the circuit that a worker keeps.
type circuitState struct {
	surface float64                // sigma before the current of the step, what was absorbed included
	passed  [historyLength]float64 // Q at the steps before, the latest first [C/m2]
}

// induced returns the charge on the electrode that the particles in the gap take from it, with
// opposite sign [C/m2]; the net charge numbers of the nodes are in w.
func (s *Simulation) induced(w *worker) float64 {
	sum := 0.0
	for j, z := range w.net {
		sum += float64(z * s.loop.of[j])
	}
	return float64(phys.ElementaryCharge * s.config.Weight * (sum / s.loop.scale))
}

// electrodePotential returns phi[0] at step n.
func (s *Simulation) electrodePotential(w *worker, n int64) float64 {
	if !s.loop.byCharge {
		return s.driveAt(n)
	}
	l := &s.loop
	sum := w.circuit.surface + s.induced(w)
	switch s.config.connection() {
	case current:
		sum += float64(s.meanCurrent(n) * s.config.TimeStep())
	case network:
		sum += (s.driveAt(n)-l.earlier(&w.circuit))/l.a[0] - w.circuit.passed[0]
		return sum / (l.vacuum + 1/l.a[0])
	}
	if s.config.Geometry.Shape == Plates {
		return s.config.Gap / phys.Epsilon0 * sum
	}
	return sum / l.vacuum
}

// earlier returns K, the part of the loop equation that is known [V].
func (l *loop) earlier(c *circuitState) float64 {
	k := 0.0
	for i, q := range c.passed {
		k += float64(l.a[i+1] * q)
	}
	return k
}

// driveAt returns the drive at step n.
func (s *Simulation) driveAt(n int64) float64 {
	return s.voltage[n%int64(len(s.voltage))]
}

// meanCurrent returns the mean of a current drive over the step that ends at n [A/m2].
func (s *Simulation) meanCurrent(n int64) float64 {
	if n == 0 {
		return 0
	}
	steps := int64(len(s.voltage))
	return 0.5 * (s.voltage[(n-1)%steps] + s.voltage[n%steps])
}

// passCurrent lets the current of step w.step flow, now that phi[0] is known. Every worker computes
// the same numbers in the same order, so that all find the same bits.
func (s *Simulation) passCurrent(w *worker) {
	c := &w.circuit
	switch s.config.connection() {
	case current:
		c.surface += float64(s.meanCurrent(w.step) * s.config.TimeStep())
	case network:
		q := (s.driveAt(w.step) - w.phi[0] - s.loop.earlier(c)) / s.loop.a[0]
		c.surface += q - c.passed[0]
		copy(c.passed[1:], c.passed[:historyLength-1])
		c.passed[0] = q
	}
}

// chargeElectrode adds what the electrode absorbed in the step before to w's count of its charge.
func (s *Simulation) chargeElectrode(w *worker) {
	if s.loop.byCharge {
		w.circuit.surface += float64(
			phys.ElementaryCharge * s.config.Weight * float64(s.absorbedAt(w.step)))
	}
}

// SurfaceCharge returns the charge on the powered electrode [C/m2] before the current of the next
// step; 0 if it is connected directly, when the drive supplies what the field needs.
func (s *Simulation) SurfaceCharge() float64 { return s.chargeNow().surface }

// PassedCharge returns the charge that has passed through the network [C/m2].
func (s *Simulation) PassedCharge() float64 { return s.chargeNow().passed[0] }

func (s *Simulation) chargeNow() circuitState {
	if len(s.workers) == 0 {
		return circuitState{}
	}
	return s.workers[0].circuit
}

func (s *Simulation) setCharge(c circuitState) {
	for _, w := range s.workers {
		w.circuit = c
	}
}
