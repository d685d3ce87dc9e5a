package run

import (
	"fmt"
	"testing"

	"ionfall/internal/validation"
)

// ohmicArgon is a discharge whose bulk is heated by friction with the gas.
func ohmicArgon(numerics string) string {
	return fmt.Sprintf(`
gap: 40 mm
gas: {pressure: 20 Pa, mixture: {Ar: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 150 V}]}
accuracy: {ion_energy: 2 %%, ion_flux: 2 %%}
numerics: %s
`, numerics)
}

// Goal: how far the number of particles that is chosen automatically is from enough where argon is
// collisional. The noise of particles acts as collisions between electrons, which bring the bulk
// closer to a Maxwellian (M. M. Turner, Phys. Plasmas 13, 033506 (2006)); so fewer of them ionize
// as much at a lower temperature. Method: the automatic choice, and the same cells and steps with
// two and four times the particles; and finer cells and steps with the same number of particles,
// which tells what these do alone.
func TestValidationConvergenceOfCollisionalArgon(t *testing.T) {
	onlyWhenValidating(t, "ten minutes with two free processors")
	automatic := runAll(t, []string{ohmicArgon("auto")})[0]
	n := chosenBy(t, automatic)
	with := func(r resolution) string {
		return ohmicArgon(fmt.Sprintf("{scheme: %s, cells: %d, steps_per_period: %d, "+
			"particles_per_cell: %d, ion_substeps: %d}",
			r.scheme, r.cells, r.steps, r.perCell, r.substeps))
	}
	twice, four := n, n
	twice.perCell *= 2
	four.perCell *= 4
	finer := n
	finer.cells *= 2
	finer.steps = 3 * n.steps / 2 / n.substeps * n.substeps
	finer.perCell = n.perCell / 2
	runs := runAll(t, []string{with(four), with(twice), with(finer)})
	var rows []validation.Row
	for _, c := range append(converging, struct {
		name, path string
		limit      float64
	}{"centre electron temperature", centreTemperature, 0.03}) {
		most := lookup(t, runs[0], c.path)
		for i, s := range append(runs[1:2:2], automatic, runs[2]) {
			v := lookup(t, s, c.path)
			reference, text, what := most, four.String(),
				[]string{"twice the particles", "automatic choice", ""}[i]
			if i == 2 {
				reference, text, what = lookup(t, automatic, c.path), n.String(),
					"finer cells and steps alone"
			}
			rows = append(rows, validation.Row{
				Section:  "number of particles, argon at 20 Pa, 40 mm, 150 V",
				Quantity: c.name + ", " + what, Unit: v.Unit,
				Reference: reference.Value, ReferenceError: reference.SE,
				Source: "own run, " + text, Status: "computed", Ours: v.Value, OursError: v.SE,
				Limit: c.limit, LimitKind: validation.Relative, Seed: 1,
				Note: fmt.Sprintf("ours: %v; verdict %s", chosenBy(t, s), s.Verdict),
			})
		}
	}
	record(t, "convergence.json", rows...)
}
