package pic

import (
	"bytes"
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/codec"
	"ionfall/internal/phys"
	"ionfall/mcc"

	"gonum.org/v1/gonum/stat/distuv"
)

// falseAlarm is the chance of one statistical check to fail although the code is right; the
// package makes fewer than 100 of them. Seeds are fixed: a check that passes once passes always.
const falseAlarm = 1e-8

// normalBound returns the two-sided bound of a normal deviate, in standard deviations.
func normalBound() float64 { return distuv.UnitNormal.Quantile(1 - falseAlarm/2) }

// checkMean fails if got is farther from want than chance allows.
func checkMean(t *testing.T, name string, got, want, stdErr float64) {
	t.Helper()
	if !(math.Abs(got-want) <= normalBound()*stdErr) {
		t.Errorf("%s: %.8g, want %.8g +- %.2g (bound %.2f standard errors)",
			name, got, want, stdErr, normalBound())
	}
}

// checkNear fails if got is farther than tolerance from want.
func checkNear(t *testing.T, name string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: %.12g, want %.12g +- %.2g", name, got, want, tolerance)
	}
}

func schemes() []Scheme { return []Scheme{MomentumConserving, EnergyConserving} }

// electrons and ions without collisions.
func electrons() Species {
	return Species{Name: "e", Charge: -1, Mass: phys.ElectronMass, Every: 1}
}

func ions(every int) Species {
	return Species{Name: "X+", Charge: 1, Mass: 40 * phys.AtomicMass, Every: every}
}

// mustNew makes a simulation or ends the test.
func mustNew(t testing.TB, c Config) *Simulation {
	t.Helper()
	s, err := New(c)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func mustAdvance(t testing.TB, s *Simulation, steps int) {
	t.Helper()
	if err := s.Advance(int64(steps)); err != nil {
		t.Fatal(err)
	}
}

func mustLoad(t testing.TB, s *Simulation, species, count int, temperature float64) {
	t.Helper()
	if err := s.Load(species, count, uniform(s.config.Cells), temperature); err != nil {
		t.Fatal(err)
	}
}

func mustAdd(t testing.TB, s *Simulation, species, chunk int, x, vx, vy, vz float64) {
	t.Helper()
	if err := s.Add(species, chunk, x, vx, vy, vz); err != nil {
		t.Fatal(err)
	}
}

func uniform(cells int) []float64 {
	d := make([]float64, cells+1)
	for j := range d {
		d[j] = 1
	}
	return d
}

// empty is a gap of 2 cm at 13.56 MHz without voltage, with so small a weight that particles do
// not feel each other.
func empty(cells, steps int, list ...Species) Config {
	return Config{
		Gap: 0.02, Cells: cells, Period: 1 / 13.56e6, StepsPerPeriod: steps,
		Species: list, Weight: 1e-6, Chunks: 3, Seed: 1,
	}
}

// discharge is a small argon or helium discharge with everything switched on: sub-cycled ions,
// partly reflecting and emitting electrodes.
type discharge struct {
	gas       string
	pressure  float64 // [Pa]
	voltage   float64
	density   float64 // [1/m3]
	particles int     // of each species
	cells     int
	steps     int
	every     int
	chunks    int
	scheme    Scheme
	seed      uint64
	inert     bool // no collisions
	plain     bool // no secondaries, no reflection, no electrons colliding with each other
}

func smallDischarge() discharge {
	return discharge{
		gas: "Ar", pressure: 10, voltage: 150, density: 4e14, particles: 4000, cells: 64,
		steps: 200, every: 4, chunks: 14, seed: 3,
	}
}

// build makes the loaded simulation.
func (d discharge) build(t testing.TB) *Simulation {
	t.Helper()
	c := Config{
		Gap: 0.02, Cells: d.cells, Period: 1 / 13.56e6, StepsPerPeriod: d.steps,
		Scheme: d.scheme, Chunks: d.chunks, Seed: d.seed,
		Drive:  Drive{Tones: []Tone{{Harmonic: 1, Amplitude: d.voltage}}},
		Weight: d.density * 0.02 / float64(d.particles),
	}
	if !d.plain {
		c.Relaxation = Relaxation{Pairs: mcc.NewCoulomb(10, c.VelocityUnit(1)), Every: 4}
		e := Electrode{IonSecondaryYield: 0.3, SecondaryEnergyEV: 2, ElectronReflection: 0.2}
		c.Electrodes = [2]Electrode{e, e}
	}
	c.Species = d.species(t, &c)
	s := mustNew(t, c)
	mustLoad(t, s, 0, d.particles, 30_000)
	mustLoad(t, s, 1, d.particles, 300)
	return s
}

func (d discharge) species(t testing.TB, c *Config) []Species {
	t.Helper()
	lib, err := crosssections.Bundled()
	if err != nil {
		t.Fatal(err)
	}
	gas, err := lib.Gas(d.gas)
	if err != nil {
		t.Fatal(err)
	}
	list := []Species{electrons(), {
		Name: gas.Ions[0].Name, Charge: 1, Mass: gas.Ions[0].Mass, Every: d.every,
	}}
	if d.inert {
		return list
	}
	back := []mcc.Background{{
		Gas: gas, Density: d.pressure / (phys.Boltzmann * 300), Temperature: 300,
	}}
	for i, name := range []string{"e", gas.Ions[0].Name} {
		sp := &list[i]
		sp.Collisions, err = mcc.NewModel(mcc.Settings{
			Projectile: name, Mass: sp.Mass, Unit: c.VelocityUnit(sp.Every),
			TimeStep: c.TimeStep() * float64(sp.Every), TopEnergy: 1000,
		}, back)
		if err != nil {
			t.Fatal(err)
		}
	}
	return list
}

// stateBytes is the whole state as a checkpoint holds it.
func stateBytes(t testing.TB, s *Simulation) []byte {
	t.Helper()
	enc := codec.NewEncoder("test", 1)
	s.Save(enc, "s.")
	var file bytes.Buffer
	if _, err := enc.WriteTo(&file); err != nil {
		t.Fatal(err)
	}
	return file.Bytes()
}

// restore puts the bytes of a state into s.
func restore(t testing.TB, s *Simulation, file []byte) error {
	t.Helper()
	dec, err := codec.Decode("test", 1, file)
	if err != nil {
		t.Fatal(err)
	}
	return s.Restore(dec, "s.")
}

// spy is an observer made of functions; those left out do nothing.
type spy struct {
	due       func(n int64) bool
	particles func(f *Frame, species, chunk int, p Particles)
	reduce    func(f *Frame, worker, workers int)
	hits      func(species, chunk int, hits []Hit)
	events    func(n int64, species, chunk int, x []float64, events []Event)
	step      func(c Circuit)
}

func (o *spy) Due(n int64) bool { return o.due != nil && o.due(n) }

func (o *spy) Particles(f *Frame, species, chunk int, p Particles) {
	if o.particles != nil {
		o.particles(f, species, chunk, p)
	}
}

func (o *spy) Reduce(f *Frame, worker, workers int) {
	if o.reduce != nil {
		o.reduce(f, worker, workers)
	}
}

func (o *spy) Hits(species, chunk int, hits []Hit) {
	if o.hits != nil {
		o.hits(species, chunk, hits)
	}
}

func (o *spy) Events(n int64, species, chunk int, x []float64, events []Event) {
	if o.events != nil {
		o.events(n, species, chunk, x, events)
	}
}

func (o *spy) Step(c Circuit) {
	if o.step != nil {
		o.step(c)
	}
}

func always(int64) bool { return true }

// watch makes o the only observer.
func watch(s *Simulation, o Observer) { s.SetObservers(o) }
