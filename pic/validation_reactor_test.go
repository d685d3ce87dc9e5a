package pic

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"ionfall/internal/phys"
	"ionfall/internal/validation"
)

// reactorRows holds the rows of circuit, shells and surfaces.
const reactorRows = "../testdata/validation/reactor.json"

func recordReactor(t *testing.T, rows ...validation.Row) {
	t.Helper()
	validation.Record(t, reactorRows, *update, rows...)
}

// emptyGap is an electrode of 0.01 m2, 2.5 cm from the other, driven by 100 V at 13.56 MHz through
// 50 ohm, 1 uH and 1 nF; nothing is between them.
func emptyGap(steps int) Config {
	const area = 0.01
	return Config{
		Gap: 0.025, Cells: 50, Period: 1 / 13.56e6, StepsPerPeriod: steps,
		Species: []Species{electrons()}, Weight: 1, Chunks: 1, Seed: 1,
		Drive:   Drive{Tones: []Tone{{Harmonic: 1, Amplitude: 100}}},
		Network: Network{Capacitance: 1e-9 / area, Resistance: 50 * area, Inductance: 1e-6 * area},
	}
}

// impedances returns those of the empty gap and of the whole circuit [ohm m2].
func impedances(c *Config) (vacuum, whole complex128) {
	n, omega := c.Network, 2*math.Pi/c.Period
	vacuum = complex(0, -1/(omega*c.VacuumCapacitance()))
	return vacuum, complex(n.Resistance, omega*n.Inductance-1/(omega*n.Capacitance)) + vacuum
}

// phasor returns the amplitude and phase of the fundamental in the last period.
func phasor(list []float64, steps int) complex128 {
	sum := complex(0, 0)
	list = list[len(list)-steps:]
	for n, v := range list {
		sum += complex(v, 0) * cmplx.Rect(2/float64(steps), -2*math.Pi*float64(n)/float64(steps))
	}
	return sum
}

// Goal: an RLC circuit with an empty gap has the analytic voltage, current and phase to 0.1 %.
// Method: 60 periods, in which what was switched on decays by e^-110; the last one's Fourier
// component. The current is a mean over each step: its phase belongs half a step earlier.
func TestValidationReactorNetwork(t *testing.T) {
	const steps = 400
	c := emptyGap(steps)
	s := mustNew(t, c)
	var v, j []float64
	watch(s, &spy{step: func(c Circuit) { v, j = append(v, c.Voltage), append(j, c.Current) }})
	mustAdvance(t, s, 60*steps)
	vacuum, z := impedances(&c)
	half := cmplx.Rect(1, math.Pi/steps)
	current, gap := phasor(j, steps)*half, phasor(v, steps)
	row := func(quantity, unit string, want, got float64) validation.Row {
		return validation.Row{
			Section: "series circuit and empty gap", Quantity: quantity, Unit: unit, Status: "exact",
			Reference: want, Ours: got, Limit: 0.001, LimitKind: validation.Relative, Seed: 1,
			Source: "complex impedances; scheme of J. P. Verboncoeur, M. V. Alves, V. Vahedi and C. K. " +
				"Birdsall, J. Comput. Phys. 104, 321 (1993)",
			Note: "0.01 m2, 2.5 cm, 50 ohm, 1 uH, 1 nF, 100 V at 13.56 MHz, 400 steps a period",
		}
	}
	want := 100 / z
	recordReactor(t,
		row("gap voltage", "V", cmplx.Abs(want*vacuum), cmplx.Abs(gap)),
		row("gap voltage, phase", "deg", deg(want*vacuum), deg(gap)),
		row("current density", "A/m2", cmplx.Abs(want), cmplx.Abs(current)),
		row("current density, phase", "deg", deg(want), deg(current)))
}

func deg(z complex128) float64 { return cmplx.Phase(z) * 180 / math.Pi }

// Goal: the scheme is of second order in the step, and a change of the step in a running circuit
// (Transfer) does not disturb it. Method: the error of the voltage with 200, 400 and 800 steps.
func TestNetworkIsOfSecondOrder(t *testing.T) {
	c := emptyGap(100)
	vacuum, z := impedances(&c)
	exact := cmplx.Abs(100 / z * vacuum)
	var last float64
	for k, steps := range []int{200, 400, 800} {
		s := mustNew(t, emptyGap(steps))
		var v []float64
		watch(s, &spy{step: func(c Circuit) { v = append(v, c.Voltage) }})
		mustAdvance(t, s, 40*steps)
		off := cmplx.Abs(phasor(v, steps)) - exact
		if k > 0 && !(math.Abs(last/off-4) < 0.2) {
			t.Errorf("%d steps: error %g V after %g", steps, off, last)
		}
		last = off
	}
	s := mustNew(t, emptyGap(200))
	mustAdvance(t, s, 40*200)
	into := mustNew(t, emptyGap(400))
	into.Transfer(s, 1)
	var v []float64
	watch(into, &spy{step: func(c Circuit) { v = append(v, c.Voltage) }})
	mustAdvance(t, into, 400)
	checkNear(t, "voltage after the change", cmplx.Abs(phasor(v, 400)), exact, 0.005*exact)
}

// Goal: a charge in the gap lifts an electrode behind a capacitor by q (1 - x/d)/(Cv + C). Method:
// a sheet of 1e-10 C on 0.01 m2 at three places, 1 nF and 10 pF; published formula, worked values.
func TestNetworkSeesCharge(t *testing.T) {
	for _, farad := range []float64{1e-9, 10e-12} {
		for _, part := range []float64{0, 0.25, 0.5} {
			c := emptyGap(400)
			c.Drive, c.Species = Drive{}, []Species{ions(1)}
			c.Network = Network{Capacitance: farad / 0.01}
			c.Weight = 1e-8 / phys.ElementaryCharge
			s := mustNew(t, c)
			var phi float64
			watch(s, &spy{step: func(c Circuit) { phi = c.Voltage }})
			mustAdd(t, s, 0, 0, part*50, 0, 0, 0)
			mustAdvance(t, s, 1)
			want := 1e-8 * (1 - part) / (c.VacuumCapacitance() + c.Network.Capacitance)
			checkNear(t, fmt.Sprintf("%g F, %g", farad, part), phi, want, 1e-9*want)
		}
	}
}

// Goal: a current drive passes its current, whatever the plasma does; a flight between shorted
// plates draws q v/d (Shockley-Ramo). Method: the meter of a small discharge; one particle.
func TestCurrentDrive(t *testing.T) {
	d := smallDischarge()
	c := d.build(t).config
	c.CurrentDrive = true
	c.Drive = Drive{Tones: []Tone{{Harmonic: 1, Amplitude: 20}}}
	s := mustNew(t, c)
	mustLoad(t, s, 0, d.particles, 30_000)
	mustLoad(t, s, 1, d.particles, 300)
	seen := 0
	watch(s, &spy{step: func(m Circuit) {
		if m.Step > 0 {
			at := func(n int64) float64 { return c.Drive.At(float64(n) / 200) }
			want := 0.5 * (at(m.Step-1) + at(m.Step))
			checkNear(t, "current", m.Current, want, 1e-8*20)
			seen++
		}
	}})
	mustAdvance(t, s, 400)
	if seen != 399 {
		t.Errorf("%d currents seen", seen)
	}
	free := emptyGap(400)
	free.Network, free.Drive, free.Species = Network{}, Drive{}, []Species{ions(1)}
	free.Weight = 1e-8 / phys.ElementaryCharge
	one := mustNew(t, free)
	var j float64
	watch(one, &spy{step: func(c Circuit) { j = c.Current }})
	mustAdd(t, one, 0, 0, 10, 1e6, 0, 0)
	mustAdvance(t, one, 3)
	checkNear(t, "current of a flight", j, 1e-8*1e6/0.025, 1e-3*0.4)
}

// Goal: energy is conserved between generator, circuit and plasma. Method: an argon discharge of 40
// periods behind resistance, inductance and capacitor; what the generator gave against the heat
// of the resistance, the change of what capacitor and inductance store, and what the electrode
// took.
// Sums over steps of a smooth waveform of 400 steps are good to (2 pi/400)^2 of the energy that
// goes to and fro; the bound is 0.1 % of what was given.
func TestValidationReactorEnergy(t *testing.T) {
	d := smallDischarge()
	d.steps, d.every, d.plain = 400, 8, true
	c := d.build(t).config
	n := Network{Capacitance: 2e-8, Resistance: 0.3, Inductance: 2e-8}
	c.Network = n
	s := mustNew(t, c)
	mustLoad(t, s, 0, d.particles, 30_000)
	mustLoad(t, s, 1, d.particles, 300)
	dt := c.TimeStep()
	var given, heat, electrode, lastJ, lastV, lastPhi float64
	stored := func(j float64) float64 {
		q := s.PassedCharge()
		return 0.5*q*q/n.Capacitance + 0.5*n.Inductance*j*j
	}
	var from, to float64
	count := 0
	watch(s, &spy{step: func(m Circuit) {
		v := c.Drive.At(float64(m.Step%400) / 400)
		if count > 4000 {
			given += 0.5 * (v + lastV) * m.Current * dt
			electrode += 0.5 * (m.Voltage + lastPhi) * m.Current * dt
			heat += n.Resistance * m.Current * m.Current * dt
			to = stored(0.5 * (m.Current + lastJ))
		} else {
			from = stored(0.5 * (m.Current + lastJ))
		}
		count++
		lastV, lastPhi, lastJ = v, m.Voltage, m.Current
	}})
	mustAdvance(t, s, 4001)
	s.TakeLedger()
	start := electrode
	mustAdvance(t, s, 12000)
	l := s.TakeLedger()
	checkNear(t, "ledger", l.Electric, electrode-start, 1e-9*electrode)
	recordReactor(t, validation.Row{
		Section: "energy of generator, circuit and plasma", Quantity: "given by the generator",
		Unit: "J/m2", Status: "exact", Reference: heat + electrode + to - from, Ours: given,
		Limit: 0.001, LimitKind: validation.Relative, Seed: d.seed,
		Source: "heat of the resistance, energy stored in capacitor and inductance, energy at the " +
			"electrode",
		Note: fmt.Sprintf("argon, 10 Pa, 150 V, 30 periods of 400 steps; heat %.1f %% of it",
			100*heat/given),
	})
}

// Goal: the surface of a dielectric layer on a grounded electrode charges negative to the floating
// potential of a Maxwellian plasma, and ions hit it with the energy of that. Method: the isolated
// wall's exact solution; the layer has three times the capacitance of the gap.
func TestValidationReactorDielectric(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some seconds")
	}
	r := &reservoir{
		scheme: EnergyConserving, electron: 3, ratio: 1836, mach: 1.2, density: 1e15, layer: 3,
	}
	r.run(t)
	var kept []validation.Row
	for _, row := range r.rows() {
		if row.Unit == "C/m2" {
			continue // the layer's other side has a part of it
		}
		row.Section = "surface of a dielectric before a collisionless plasma"
		kept = append(kept, row)
	}
	recordReactor(t, kept...)
}
