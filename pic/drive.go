package pic

import "math"

// Tone is one cosine of the drive.
type Tone struct {
	Harmonic  int     // frequency over the fundamental
	Amplitude float64 // [V]
	Phase     float64 // [rad]
}

// Drive is the voltage of the powered electrode against the grounded one:
//
//	V(t) = Bias + sum of Amplitude cos(2 pi Harmonic t/T + Phase)
//
// with T the period of the fundamental. In a pulsed drive T is that of the pulse: the tones are on
// for the first part Gate of it, and rise and fall linearly within the part Ramp.
type Drive struct {
	Bias  float64 // [V]
	Tones []Tone
	// Gate is the part of the period in which the tones are on, and Ramp that in which they rise and
	// fall; Gate 0 leaves them on.
	Gate, Ramp float64
}

// At returns V [V] at the given part of the fundamental period.
func (d Drive) At(part float64) float64 {
	v := d.Bias
	envelope := d.envelope(part)
	for _, t := range d.Tones {
		v += envelope * t.Amplitude * math.Cos(2*math.Pi*float64(t.Harmonic)*part+t.Phase)
	}
	return v
}

// envelope is the part of the tones' amplitudes that is on.
func (d Drive) envelope(part float64) float64 {
	if d.Gate == 0 {
		return 1
	}
	part -= math.Floor(part)
	return math.Max(0, math.Min(1, math.Min(part, d.Gate-part)/d.Ramp))
}

// samples tabulates one period in n steps.
func (d Drive) samples(n int) []float64 {
	v := make([]float64, n)
	for i := range v {
		v[i] = d.At(float64(i) / float64(n))
	}
	return v
}

// Largest returns the largest magnitude of V the tones could add up to [V].
func (d Drive) Largest() float64 {
	v := math.Abs(d.Bias)
	for _, t := range d.Tones {
		v += math.Abs(t.Amplitude)
	}
	return v
}

// SetDrive changes the drive from the next step on; the potential of a directly connected electrode
// jumps with it. Only between steps.
func (s *Simulation) SetDrive(d Drive) error {
	c := s.config
	c.Drive = d
	if err := c.checkCircuit(); err != nil {
		return err
	}
	s.config.Drive = d
	s.voltage = d.samples(c.StepsPerPeriod)
	s.haveField = false
	return nil
}

// LargestVoltage returns a bound of the voltage across the gap [V], for tables: behind a capacitor
// the bias may add the amplitudes once more; a current drive has at most the voltage of the
// empty gap. It is that of the drive which the simulation was made with.
func (c *Config) LargestVoltage() float64 {
	if c.TopVoltage > 0 {
		return c.TopVoltage
	}
	if c.CurrentDrive {
		v := 0.0
		for _, t := range c.Drive.Tones {
			omega := 2 * math.Pi * float64(t.Harmonic) / c.Period
			v += math.Abs(t.Amplitude) / (omega * c.VacuumCapacitance())
		}
		return v
	}
	if c.Network.Capacitance > 0 {
		return 2 * c.Drive.Largest()
	}
	return c.Drive.Largest()
}
