package pic_test

import (
	"fmt"

	"ionfall/internal/phys"
	"ionfall/pic"
)

// Electrons and ions between two plates at 100 V, 13.56 MHz, for one period.
func Example() {
	config := pic.Config{
		Gap: 0.02, Cells: 64, Period: 1 / 13.56e6, StepsPerPeriod: 400,
		Scheme: pic.EnergyConserving,
		Drive:  pic.Drive{Tones: []pic.Tone{{Harmonic: 1, Amplitude: 100}}},
		Species: []pic.Species{
			{Name: "e", Charge: -1, Mass: phys.ElectronMass, Every: 1},
			{Name: "Ar+", Charge: 1, Mass: 39.948 * phys.AtomicMass, Every: 4},
		},
		Weight: 4e8, // real particles per m2 that each stands for: 2e14 /m3 here
		Chunks: 4, Seed: 1,
	}
	discharge, err := pic.New(config)
	if err != nil {
		fmt.Println(err)
		return
	}
	density := make([]float64, config.Cells+1)
	for j := range density {
		density[j] = 1 // uniform
	}
	for species, kelvin := range []float64{20_000, 300} {
		if err := discharge.Load(species, 10_000, density, kelvin); err != nil {
			fmt.Println(err)
			return
		}
	}
	if err := discharge.Advance(400); err != nil {
		fmt.Println(err)
		return
	}
	ledger := discharge.TakeLedger()
	for i, sp := range ledger.Species {
		gone := sp.Absorbed[pic.Powered] + sp.Absorbed[pic.Grounded]
		fmt.Printf("%-3s charge kept: %v\n", discharge.Species()[i].Name, sp.Count+gone == 10_000)
	}
	fmt.Println("electrons leave first:", ledger.Species[0].Count < ledger.Species[1].Count)
	// Output:
	// e   charge kept: true
	// Ar+ charge kept: true
	// electrons leave first: true
}
