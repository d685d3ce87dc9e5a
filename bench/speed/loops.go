package main

import (
	"bytes"
	"fmt"
	"slices"
	"time"

	"ionfall/crosssections"
	"ionfall/diagnostics"
	"ionfall/internal/kernels"
	"ionfall/internal/phys"
	"ionfall/mcc"
	"ionfall/pic"
)

// discharge is what a whole loop is timed with.
type discharge struct {
	title        string
	gas          string
	gap          float64 // [m]
	density      float64 // of the gas [1/m3]
	voltage      float64 // amplitude [V]
	cells, steps int
	particles    int     // of each species
	plasma       float64 // density [1/m3]
}

// helium are the conditions and numerics of the helium benchmark, case 1 (M. M. Turner et al.,
// Phys. Plasmas 20, 013507 (2013)).
func helium() discharge {
	return discharge{
		"helium benchmark, case 1, published numerics (128 cells, 512 particles a cell, 400 " +
			"steps a period)", "He", 0.067, 9.64e20, 450, 128, 400, 128 * 512, 2.56e14,
	}
}

// argon is the discharge of the example, with resolved numerics.
func argon() discharge {
	return discharge{
		"argon, 5 Pa, 4 cm, 250 V, resolved (256 cells, 400 particles a cell, 1200 steps a period)",
		"Ar", 0.04, 5 / (phys.Boltzmann * 300), 250, 256, 1200, 256 * 400, 2e15,
	}
}

// timed is a way to run a loop and the speeds it reached [moves/s].
type timed struct {
	discharge
	set     kernels.Set
	workers int
	speeds  []float64
}

// loops times whole loops with collisions, fields and all diagnostics; those that are compared
// take turns.
func loops(b *bytes.Buffer, runs int) error {
	var list []*timed
	for _, name := range kernels.Available() {
		set, err := kernels.Select(name)
		if err != nil {
			return err
		}
		for workers := 1; workers <= 2; workers++ {
			list = append(list, &timed{discharge: helium(), set: set, workers: workers})
		}
	}
	for workers := 1; workers <= 2; workers++ {
		list = append(list, &timed{discharge: argon(), set: kernels.Best(), workers: workers})
	}
	for range runs {
		for _, l := range list {
			speed, err := l.speed()
			if err != nil {
				return err
			}
			l.speeds = append(l.speeds, speed)
		}
	}
	fmt.Fprintf(b, "## Whole loop\n\nMomentum conserving, ions moved every step, all diagnostics on. "+
		"Million particle moves a second of wall\ntime, %d runs each, in turn. Kernels are chosen "+
		"by IONFALL_KERNELS.\n\n"+
		"| discharge | kernels | workers | median | least | most | over one worker |\n"+
		"|---|---|---|---|---|---|---|\n", runs)
	var one float64
	for _, l := range list {
		slices.Sort(l.speeds)
		median := l.speeds[len(l.speeds)/2]
		if l.workers == 1 {
			one = median
		}
		fmt.Fprintf(b, "| %s | %s | %d | %.0f | %.0f | %.0f | %.2f |\n", l.title, l.set.Name, l.workers,
			median/1e6, l.speeds[0]/1e6, l.speeds[len(l.speeds)-1]/1e6, median/one)
	}
	b.WriteString("\n")
	return nil
}

// speed returns particle moves a second of wall time over some RF periods.
func (l *timed) speed() (float64, error) {
	s, err := l.build(l.particles, l.set)
	if err != nil {
		return 0, err
	}
	s.SetWorkers(l.workers)
	rec := diagnostics.New(s, nil, 0)
	s.SetObservers(rec)
	steps := int64(l.steps)
	if err := s.Advance(steps); err != nil {
		return 0, err
	}
	s.TakeLedger()
	rec.Start(4) // periods of a batch, as in a run
	begin := time.Now()
	moved := int64(0)
	for range max(2, 3200/l.steps) {
		if err := s.Advance(steps); err != nil {
			return 0, err
		}
		ledger := s.TakeLedger()
		rec.EndPeriod(ledger.Weight)
		moved += ledger.Moved
	}
	return float64(moved) / time.Since(begin).Seconds(), nil
}

// build returns the loaded discharge with the given number of particles of each species.
func (d discharge) build(particles int, set kernels.Set) (*pic.Simulation, error) {
	library, err := crosssections.Bundled()
	if err != nil {
		return nil, err
	}
	gas, err := library.Gas(d.gas)
	if err != nil {
		return nil, err
	}
	c := pic.Config{
		Gap: d.gap, Cells: d.cells, Period: 1 / 13.56e6, StepsPerPeriod: d.steps, Chunks: 32, Seed: 1,
		Drive: pic.Drive{Tones: []pic.Tone{
			{Harmonic: 1, Amplitude: d.voltage, Phase: -1.5707963267948966},
		}},
		Weight: d.plasma * d.gap / float64(particles), Kernels: set,
	}
	background := []mcc.Background{{Gas: gas, Density: d.density, Temperature: 300}}
	ion := gas.Ions[0]
	for _, sp := range []pic.Species{
		{Name: "e", Charge: -1, Mass: phys.ElectronMass, Every: 1},
		{Name: ion.Name, Charge: ion.Charge, Mass: ion.Mass, Every: 1},
	} {
		sp.Collisions, err = mcc.NewModel(mcc.Settings{
			Projectile: sp.Name, Mass: sp.Mass, Unit: c.VelocityUnit(1), TimeStep: c.TimeStep(),
			TopEnergy: 1.3*d.voltage + 50,
		}, background)
		if err != nil {
			return nil, err
		}
		c.Species = append(c.Species, sp)
	}
	s, err := pic.New(c)
	if err != nil {
		return nil, err
	}
	uniform := slices.Repeat([]float64{1}, c.Cells+1)
	if err := s.Load(0, particles, uniform, 30000); err != nil {
		return nil, err
	}
	return s, s.Load(1, particles, uniform, 300)
}
