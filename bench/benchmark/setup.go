package main

import (
	"math"
	"slices"

	"ionfall/crosssections"
	"ionfall/mcc"
	"ionfall/pic"
)

// chunks is how finely the particles are dealt out to the workers.
const chunks = 64

// setup builds the loaded discharge by the published rules: the left electrode at
// V0 sin(2 pi f t), full absorption, no emission; ions moved at every step.
func (c *benchmarkCase) setup(gas *crosssections.Gas, o *options) (*pic.Simulation, error) {
	sine := pic.Tone{Harmonic: 1, Amplitude: c.Voltage, Phase: -math.Pi / 2}
	k := pic.Config{
		Gap: gap, Cells: c.Cells, Period: 1 / frequency, StepsPerPeriod: c.StepsPerPeriod,
		Scheme: o.scheme, Drive: pic.Drive{Tones: []pic.Tone{sine}}, Weight: c.weight(),
		Chunks: chunks, Seed: o.seed,
	}
	for _, sp := range []pic.Species{
		{Name: crosssections.ElectronName, Charge: -1, Mass: electronMass, Every: 1},
		{Name: heliumIon, Charge: 1, Mass: heliumMass, Every: 1},
	} {
		model, err := mcc.NewModel(mcc.Settings{
			Projectile: sp.Name, Mass: sp.Mass, Unit: k.VelocityUnit(1), TimeStep: k.TimeStep(),
			TopEnergy: max(300, 1.3*c.Voltage+50),
		}, []mcc.Background{{Gas: gas, Density: c.GasDensity, Temperature: gasTemperature}})
		if err != nil {
			return nil, err
		}
		sp.Collisions = model
		k.Species = append(k.Species, sp)
	}
	s, err := pic.New(k)
	if err != nil {
		return nil, err
	}
	density := c.Density
	if o.startDensity > 0 {
		density = o.startDensity
	}
	count := int(math.Round(density * gap / c.weight()))
	uniform := slices.Repeat([]float64{1}, c.Cells+1)
	if err := s.Load(0, count, uniform, electronTemperature); err != nil {
		return nil, err
	}
	if err := s.Load(1, count, uniform, gasTemperature); err != nil {
		return nil, err
	}
	s.SetWorkers(o.cores)
	return s, nil
}
