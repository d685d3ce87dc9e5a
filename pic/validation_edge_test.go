package pic_test

import (
	cli "flag"
	"fmt"
	"testing"

	"ionfall/diagnostics"
	"ionfall/internal/validation"
)

// Goal: the electron edge of a step in the electron density is the step. Method: ions of constant
// density, electrons equal to them beyond the step and absent before it; steps at nodes, where
// linear densities between nodes put half of the cell's electrons before the step: the edge is half
// a cell before it, exactly. Both walls' sheaths use the same function.
//
// Ref: R. P. Brinkmann, J. Appl. Phys. 102, 093303 (2007).
func TestValidationElectronEdge(t *testing.T) {
	const nodes = 101
	var rows []validation.Row
	for _, step := range []int{1, 7, 40, 99} {
		electrons, positive := make([]float64, nodes), make([]float64, nodes)
		for j := range nodes {
			positive[j] = 3e15
			if j >= step {
				electrons[j] = 3e15
			}
		}
		rows = append(rows, validation.Row{
			Section: "electron edge of a sheath", Unit: "nodes", Status: "exact",
			Quantity:  fmt.Sprintf("step between nodes %d and %d", step-1, step),
			Source:    "R. P. Brinkmann, J. Appl. Phys. 102, 093303 (2007)",
			Reference: float64(step) - 0.5, Ours: diagnostics.ElectronEdge(electrons, positive),
			Limit: 1e-12, LimitKind: validation.Relative,
		})
	}
	update := cli.Lookup("update").Value.String() == "true"
	validation.Record(t, "../testdata/validation/plasma.json", update, rows...)
}
