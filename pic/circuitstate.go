package pic

import (
	"fmt"
	"math"

	"ionfall/internal/codec"
)

// ShiftBias moves the potential of the powered electrode by dv [V], as if the direct current of a
// longer time had passed: the charge of the blocking capacitor and that on the electrode change
// together, the particles stay. Without a capacitor that could keep it, it does nothing.
func (s *Simulation) ShiftBias(dv float64) {
	kind := s.config.connection()
	if kind == direct || kind == network && s.config.Network.Capacitance == 0 {
		return
	}
	c := s.chargeNow()
	c.surface += s.loop.vacuum * dv
	if kind == network {
		for i := range c.passed {
			c.passed[i] -= s.config.Network.Capacitance * dv
		}
	}
	s.setCharge(c)
	s.haveField = false
}

// scaleCharge follows a change of all densities by the factor. An isolated electrode's charge is in
// proportion; one in a circuit keeps its potential and takes the image charge that needs.
func (s *Simulation) scaleCharge(factor float64) {
	if !s.loop.byCharge {
		return
	}
	c := s.chargeNow()
	if s.config.Isolated {
		c.surface *= factor
	} else {
		w := s.workers[0]
		s.sumCharge(w, s.step)
		s.sumNet(w)
		c.surface += (1 - factor) * s.induced(w)
	}
	s.setCharge(c)
}

// takeCharge takes over the circuit's state of a simulation whose time step may differ. The earlier
// Q are the values of the cubic through the other's four.
func (s *Simulation) takeCharge(from *Simulation) {
	c := from.chargeNow()
	old := c.passed
	ratio := s.config.TimeStep() / from.config.TimeStep()
	for i := range c.passed {
		c.passed[i] = cubic(old, float64(i+1)*ratio-1)
	}
	c.surface += c.passed[0] - old[0]
	s.setCharge(c)
}

// cubic returns the polynomial through q[0] at 0, q[1] at 1 ... at x.
func cubic(q [historyLength]float64, x float64) float64 {
	sum := 0.0
	for i := range q {
		term := q[i]
		for k := range q {
			if k != i {
				term *= (x - float64(k)) / float64(i-k)
			}
		}
		sum += term
	}
	return sum
}

func (s *Simulation) saveCharge(enc *codec.Encoder, prefix string) {
	if s.loop.byCharge {
		c := s.chargeNow()
		enc.Float64s(prefix+"surface", append([]float64{c.surface}, c.passed[:]...))
	}
}

// restoreCharge reads the state of the circuit.
func (s *Simulation) restoreCharge(dec *codec.Decoder, prefix string) (circuitState, error) {
	var c circuitState
	if !s.loop.byCharge {
		return c, nil
	}
	list := dec.Float64s(prefix + "surface")
	if err := dec.Err(); err != nil {
		return c, err
	}
	if len(list) != 1+historyLength {
		return c, fmt.Errorf("pic: saved state of the circuit has %d numbers, want %d",
			len(list), 1+historyLength)
	}
	for _, v := range list {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return c, fmt.Errorf("pic: saved charge %g of the circuit, want numbers", v)
		}
	}
	c.surface = list[0]
	copy(c.passed[:], list[1:])
	return c, nil
}
