package run

import (
	"context"
	"math"
	"path/filepath"
	"testing"

	"ionfall/internal/store"
	"ionfall/internal/validation"
)

const collisionalArgon = `
gap: 25 mm
gas: {pressure: 100 Pa, mixture: {Ar: 1}, fast_neutrals: {threshold: 1 eV}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 150 V}]}
initial: {density: 1.5e15 /m3, electron_temperature: 2 eV}
numerics: {cells: 96, steps_per_period: 1600, particles_per_cell: 40, ion_substeps: 8, periods: 60, average_periods: 40}
`

// Goal: at 100 Pa of argon what the field gives to the ions is found at the walls, with the fast
// neutrals, and in the gas. Method: the field's work from J E on the grid, which knows nothing of
// collisions, against impacts on the walls and the losses in collisions; within 2 %. Without the
// neutrals the walls would lack more than a tenth of what arrives there.
func TestEnergyAtTheWalls(t *testing.T) {
	if testing.Short() {
		t.Skip("half a minute")
	}
	dir := filepath.Join(t.TempDir(), "out")
	s, _, err := Run(context.Background(), plan(t, collisionalArgon), Options{Out: dir})
	if err != nil {
		t.Fatal(err)
	}
	profiles, err := store.ReadTable(filepath.Join(dir, "profiles.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	x, err := profiles.Floats("x_m")
	if err != nil {
		t.Fatal(err)
	}
	power, err := profiles.Floats("power_Ar_plus_Wpm3")
	if err != nil {
		t.Fatal(err)
	}
	given := 0.0
	for j := 1; j < len(x); j++ {
		given += 0.5 * (power[j] + power[j-1]) * (x[j] - x[j-1])
	}
	ions, neutrals := 0.0, 0.0
	for _, wall := range []string{"powered", "grounded"} {
		ions += lookup(t, s, "ion_energy_flux_Wpm2."+wall+".all").Value
		neutrals += lookup(t, s, "neutral_energy_flux_Wpm2."+wall+".all").Value
	}
	gas := lookup(t, s, "gas_heating_Wpm2").Value
	found := ions + neutrals + gas
	t.Logf("field %.4g W/m2; walls: ions %.4g, fast neutrals %.4g; gas %.4g", given, ions, neutrals,
		gas)
	if math.Abs(found/given-1) > 0.02 {
		t.Errorf("found %.4g W/m2 of %.4g", found, given)
	}
	if neutrals < 0.1*ions {
		t.Errorf("fast neutrals bring %.4g W/m2, ions %.4g: want more than a tenth", neutrals, ions)
	}
	record(t, "gases.json", validation.Row{
		Section: "fast neutrals: argon, 100 Pa, 25 mm, 150 V, 13.56 MHz", Quantity: "energy of the " +
			"ions found at the walls and in the gas", Unit: "W/m2",
		Reference: given, Source: "work of the field on the ions, from J E on the grid",
		Status: "computed", Ours: found,
		OursError: lookup(t, s, "ion_energy_flux_Wpm2.grounded.all").SE,
		Limit:     0.02, LimitKind: validation.Relative, Seed: 1,
		Note: "ions and fast neutrals above 1 eV at both walls, the rest in the gas",
	})
}
