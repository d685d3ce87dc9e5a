package diagnostics

import (
	"fmt"
	"math"

	"ionfall/internal/codec"
	"ionfall/internal/stats"
	"ionfall/pic"
)

// Meter is a pic.Observer that reads what an instrument at the powered electrode shows, period by
// period, whatever else is recorded.
//
// Components are those of cos(k w t) and -sin(k w t), so that a + i b is the phasor of harmonic k.
// A current is a mean over the step before and counts at its middle.
type Meter struct {
	harmonics []int
	cos, sin  [][]float64 // by harmonic: one period of half steps
	steps     int

	sums   []float64 // of the running period
	count  int64
	series [][]float64 // by quantity, a value a period
}

// Quantities of the meter; four for each harmonic after these.
const (
	meterVoltage = iota // mean
	meterLow            // least and largest
	meterHigh
	meterSquare // of the current, mean
	meterMidLow
	meterMidHigh
	meterFixed
)

const (
	meterVoltageRe = iota
	meterVoltageIm
	meterCurrentRe
	meterCurrentIm
	meterPerHarmonic
)

// NewMeter returns a meter for the simulation that analyses the given harmonics.
func NewMeter(s *pic.Simulation, harmonics []int) *Meter {
	c := s.Config()
	m := &Meter{harmonics: harmonics, steps: c.StepsPerPeriod}
	for _, k := range harmonics {
		cos, sin := make([]float64, 2*m.steps), make([]float64, 2*m.steps)
		for i := range cos {
			sin[i], cos[i] = math.Sincos(math.Pi * float64(k*i%(2*m.steps)) / float64(m.steps))
		}
		m.cos, m.sin = append(m.cos, cos), append(m.sin, sin)
	}
	m.sums = make([]float64, meterFixed+meterPerHarmonic*len(harmonics))
	m.series = make([][]float64, len(m.sums))
	m.clear()
	return m
}

func (m *Meter) clear() {
	clear(m.sums)
	m.count = 0
	m.sums[meterLow], m.sums[meterHigh] = math.Inf(1), math.Inf(-1)
	m.sums[meterMidLow], m.sums[meterMidHigh] = math.Inf(1), math.Inf(-1)
}

// Step implements pic.Observer.
func (m *Meter) Step(c pic.Circuit) {
	s := m.sums
	m.count++
	s[meterVoltage] += c.Voltage
	s[meterLow], s[meterHigh] = math.Min(s[meterLow], c.Voltage), math.Max(s[meterHigh], c.Voltage)
	s[meterMidLow] = math.Min(s[meterMidLow], c.MidGap)
	s[meterMidHigh] = math.Max(s[meterMidHigh], c.MidGap)
	s[meterSquare] += float64(c.Current * c.Current)
	at := 2 * int(c.Step%int64(m.steps))
	before := (at + 2*m.steps - 1) % (2 * m.steps)
	for k := range m.harmonics {
		h := s[meterFixed+meterPerHarmonic*k:]
		h[meterVoltageRe] += float64(c.Voltage * m.cos[k][at])
		h[meterVoltageIm] -= float64(c.Voltage * m.sin[k][at])
		h[meterCurrentRe] += float64(c.Current * m.cos[k][before])
		h[meterCurrentIm] -= float64(c.Current * m.sin[k][before])
	}
}

// EndPeriod closes an RF period.
func (m *Meter) EndPeriod() {
	for q, sum := range m.sums {
		switch {
		case q >= meterFixed:
			sum *= 2 / float64(m.count)
		case q == meterVoltage || q == meterSquare:
			sum /= float64(m.count)
		}
		m.series[q] = append(m.series[q], sum)
	}
	m.clear()
}

// Due implements pic.Observer: the meter sees no particles.
func (m *Meter) Due(int64) bool { return false }

// Particles implements pic.Observer.
func (m *Meter) Particles(*pic.Frame, int, int, pic.Particles) {}

// Reduce implements pic.Observer.
func (m *Meter) Reduce(*pic.Frame, int, int) {}

// Hits implements pic.Observer.
func (m *Meter) Hits(int, int, []pic.Hit) {}

// Events implements pic.Observer.
func (m *Meter) Events(int64, int, int, []float64, []pic.Event) {}

// last returns the last n values of a quantity.
func (m *Meter) last(q, n int) []float64 {
	s := m.series[q]
	return s[max(0, len(s)-n):]
}

// Periods returns how many periods the meter has seen.
func (m *Meter) Periods() int { return len(m.series[0]) }

// Bias returns the mean voltage of each of the last n periods [V].
func (m *Meter) Bias(n int) []float64 { return m.last(meterVoltage, n) }

// SelfBias returns the mean voltage of the powered electrode over the last n periods [V].
func (m *Meter) SelfBias(n int) stats.Estimate { return stats.Mean(m.last(meterVoltage, n)) }

// PeakToPeak returns the peak-to-peak voltage [V].
func (m *Meter) PeakToPeak(n int) stats.Estimate {
	low, high := m.last(meterLow, n), m.last(meterHigh, n)
	list := make([]float64, len(low))
	for i := range list {
		list[i] = high[i] - low[i]
	}
	return stats.Mean(list)
}

// MidGap returns the least and the largest potential in the middle of the gap in a period [V].
func (m *Meter) MidGap(n int) (low, high stats.Estimate) {
	return stats.Mean(m.last(meterMidLow, n)), stats.Mean(m.last(meterMidHigh, n))
}

// RMS returns the root mean square of the current [A/m2].
func (m *Meter) RMS(n int) stats.Estimate {
	e := stats.Mean(m.last(meterSquare, n))
	root := math.Sqrt(e.Mean)
	e.Mean, e.StdErr = root, e.StdErr/(2*root)
	return e
}

// Reading is what the meter shows at one frequency. With V and J the phasors of voltage and
// current, the phase is that of J before V, and V/J = Resistance + i Reactance.
type Reading struct {
	Harmonic              int
	Voltage               stats.Estimate // amplitude [V]
	Current               stats.Estimate // amplitude [A/m2]
	PhaseDeg              stats.Estimate // of the current before the voltage [deg]
	Resistance, Reactance stats.Estimate // [ohm m2]
}

// Readings returns those of the last n periods, by harmonic.
//
// Errors: each period's phasors are turned by the mean phases, so that their real parts show the
// scatter of the amplitude and their imaginary parts, over the amplitude, that of the phase.
func (m *Meter) Readings(n int) []Reading {
	var list []Reading
	for k, harmonic := range m.harmonics {
		q := meterFixed + meterPerHarmonic*k
		v, vSide, vPhase := along(m.last(q+meterVoltageRe, n), m.last(q+meterVoltageIm, n))
		j, jSide, jPhase := along(m.last(q+meterCurrentRe, n), m.last(q+meterCurrentIm, n))
		r := Reading{Harmonic: harmonic, Voltage: stats.Mean(v), Current: stats.Mean(j)}
		difference := make([]float64, len(j))
		for i := range difference {
			difference[i] = jSide[i]/r.Current.Mean - vSide[i]/r.Voltage.Mean
		}
		phase := math.Remainder(jPhase-vPhase, 2*math.Pi)
		turn := stats.Mean(difference)
		r.PhaseDeg = stats.Estimate{
			Mean: phase * 180 / math.Pi, StdErr: turn.StdErr * 180 / math.Pi, N: turn.N,
			Batch: turn.Batch,
		}
		r.Resistance, r.Reactance = impedance(v, j, difference, phase)
		list = append(list, r)
	}
	return list
}

// along turns phasors by their mean phase: their parts along and across it.
func along(re, im []float64) (parallel, across []float64, phase float64) {
	var a, b float64
	for i := range re {
		a, b = a+re[i], b+im[i]
	}
	phase = math.Atan2(b, a)
	sin, cos := math.Sincos(phase)
	parallel, across = make([]float64, len(re)), make([]float64, len(re))
	for i := range re {
		parallel[i], across[i] = re[i]*cos+im[i]*sin, im[i]*cos-re[i]*sin
	}
	return parallel, across, phase
}

// impedance returns V/J: amplitude ratio and minus the phase, with the scatter of both in each
// period to first order.
func impedance(v, j, turn []float64, phase float64) (re, im stats.Estimate) {
	var meanV, meanJ float64
	for i := range v {
		meanV, meanJ = meanV+v[i], meanJ+j[i]
	}
	ratio := meanV / meanJ
	sin, cos := math.Sincos(-phase)
	real, imaginary := make([]float64, len(v)), make([]float64, len(v))
	for i := range v {
		z := ratio * (1 + v[i]*float64(len(v))/meanV - j[i]*float64(len(v))/meanJ)
		real[i] = z*cos + ratio*sin*turn[i]
		imaginary[i] = z*sin - ratio*cos*turn[i]
	}
	return stats.Mean(real), stats.Mean(imaginary)
}

// Save writes the state.
func (m *Meter) Save(enc *codec.Encoder, prefix string) {
	enc.Int64(prefix+"count", m.count)
	enc.Float64s(prefix+"sums", m.sums)
	for q := range m.series {
		enc.Float64s(fmt.Sprintf("%sseries%d", prefix, q), m.series[q])
	}
}

// Restore replaces the state by one that Save wrote.
func (m *Meter) Restore(dec *codec.Decoder, prefix string) error {
	count, sums := dec.Int64(prefix+"count"), dec.Float64s(prefix+"sums")
	if err := dec.Err(); err != nil {
		return err
	}
	if len(sums) != len(m.sums) {
		return fmt.Errorf("diagnostics: the saved meter has %d sums, want %d", len(sums), len(m.sums))
	}
	m.count, m.sums = count, sums
	for q := range m.series {
		m.series[q] = dec.Float64s(fmt.Sprintf("%sseries%d", prefix, q))
		if dec.Err() == nil && len(m.series[q]) != len(m.series[0]) {
			return fmt.Errorf("diagnostics: the saved meter's series differ in length")
		}
	}
	return dec.Err()
}
