package mcc_test

import (
	"fmt"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/rng"
	"ionfall/mcc"
)

// Ten thousand electrons of 20 eV spend 10 ns in argon of 5 Pa and 300 K.
func Example() {
	lib, err := crosssections.Bundled()
	if err != nil {
		fmt.Println(err)
		return
	}
	argon, err := lib.Gas("Ar")
	if err != nil {
		fmt.Println(err)
		return
	}
	model, err := mcc.NewModel(mcc.Settings{
		Projectile: "e", Mass: phys.ElectronMass,
		Unit: 1, TimeStep: 1e-10, TopEnergy: 100,
	}, []mcc.Background{{Gas: argon, Density: 1.2e21, Temperature: 300}})
	if err != nil {
		fmt.Println(err)
		return
	}
	vx, vy, vz := make([]float64, 10_000), make([]float64, 10_000), make([]float64, 10_000)
	for i := range vx {
		vx[i] = 2.652e6 // m/s
	}
	out := model.NewOutcome()
	for step := range uint64(100) {
		key := rng.Key{Seed: 1, Purpose: rng.Collisions, Step: step}
		stream := key.Stream()
		model.Collide(&stream, vx, vy, vz, out)
	}
	for c, p := range model.Processes() {
		fmt.Printf("%-10s happened: %v\n", p.Kind, out.Counts[c] > 100)
	}
	fmt.Println("an electron and an ion each:", int64(len(out.Births)) == out.Counts[2])
	// Output:
	// elastic    happened: true
	// excitation happened: true
	// ionization happened: true
	// an electron and an ion each: true
}
