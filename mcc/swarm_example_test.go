package mcc_test

import (
	"context"
	"fmt"
	"log"

	"ionfall/crosssections"
	"ionfall/mcc"
)

// A swarm of electrons in cold argon at 100 Td.
func ExampleSwarm() {
	library, err := crosssections.Bundled()
	if err != nil {
		log.Fatal(err)
	}
	argon, err := library.Gas("Ar")
	if err != nil {
		log.Fatal(err)
	}
	gas := []mcc.Background{{Gas: argon, Density: 1e23}}
	r, err := mcc.Swarm(context.Background(), gas, mcc.SwarmSettings{
		Projectile: "e", Field: 100, Particles: 1000, RelativeError: 0.02, Seed: 1,
	})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("mean energy %.1f eV\n", r.MeanEnergy.Mean)
	fmt.Printf("faster bulk than flux: %t\n", r.BulkDrift.Mean > r.FluxDrift.Mean)
	// Output:
	// mean energy 6.8 eV
	// faster bulk than flux: true
}
