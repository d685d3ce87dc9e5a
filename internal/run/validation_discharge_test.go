package run

import (
	"fmt"
	"testing"

	"ionfall/internal/store"
	"ionfall/internal/validation"
)

// argonRows compares a run with the independent solution of the same discharge.
func argonRows(t *testing.T, name string, s *store.Summary) []validation.Row {
	t.Helper()
	var rows []validation.Row
	for _, want := range independentArgon {
		got := lookup(t, s, want.path)
		note := ""
		if want.path == "electron_density_center_m3" {
			note = "; rises with the number of particles, see the part on numerics; tested: with " +
				"velocities half a step behind at collisions, as is usual, 300 particles a cell give " +
				"(4.03 ± 0.03)e15"
		}
		rows = append(rows, validation.Row{
			Section: "whole discharge: argon, 5 Pa, 40 mm, 250 V, 13.56 MHz, " + name,
			// Two of its seeds, and its grids and steps, agree within 1 %.
			Quantity: want.path, Unit: got.Unit, Reference: want.value,
			Source: "independent particle simulation with the same published cross sections",
			Status: "computed", Ours: got.Value, OursError: got.SE, Limit: want.tolerance,
			LimitKind: validation.Relative, Seed: 1,
			Note: fmt.Sprintf("reference to about 1 %%; ours %v, verdict %s%s", chosenBy(t, s),
				s.Verdict, note),
		})
	}
	return rows
}

// The resolved discharge with three times the particles: what is left of the agreement where noise
// heats the electrons less.
func TestValidationArgonManyParticles(t *testing.T) {
	onlyWhenValidating(t, "some minutes")
	checkArgon(t, "Debye length resolved, 300 particles a cell", "numerics: {cells: 256, "+
		"steps_per_period: 1200, particles_per_cell: 300, scheme: momentum_conserving, "+
		"ion_substeps: 8}\n")
}
