package main

import (
	"encoding/json"
	"fmt"
	"os"

	"ionfall/internal/validation"
)

// independent are mid-plane densities of an independent program with the same sets of tables and
// the published rules (computed; six runs of case 1 scattered by 0.8 %, taken as the error of one).
// Its helium sets differ from the bundled ones above 200 eV, where effective minus inelastic
// is noise and ours goes over to first Born values.
var independent = map[string]float64{
	"1 default": 0.208e15, "1 phelps": 0.208e15, "1 phelps-beb": 0.217e15, "1 estimate": 0.165e15,
	"2 estimate": 0.91e15,
}

const (
	independentError = 0.008
	publishedLimit   = 0.02 // the pass band of a published repetition (Juhasz et al. 2021)
	independentLimit = 4    // joint standard errors
)

// recordRows merges the results in the JSON files into the rows of a validation file. Runs that
// were not finished are refused.
func recordRows(path string, files []string) error {
	var rows []validation.Row
	for _, file := range files {
		data, err := os.ReadFile(file)
		if err != nil {
			return err
		}
		var list []result
		if err := json.Unmarshal(data, &list); err != nil {
			return fmt.Errorf("%s: %w", file, err)
		}
		for i := range list {
			r := &list[i]
			if !r.Complete || r.MidPlaneError == nil {
				return fmt.Errorf("%s: the run has %d periods, want all that are published",
					file, r.Periods)
			}
			rows = append(rows, r.rows()...)
		}
	}
	return validation.Merge(path, rows...)
}

func (r *result) rows() []validation.Row {
	name := r.CrossSections
	if len(name) > 4 && name[:4] == "set " {
		name = name[4:]
	}
	base := validation.Row{
		Section: fmt.Sprintf("helium benchmark, case %d", r.Case), Unit: "1/m3",
		Ours: r.MidPlane, OursError: *r.MidPlaneError, Seed: r.Seed,
	}
	run := fmt.Sprintf("mid-plane ion density, set %s, %s", name, r.Scheme)
	cost := fmt.Sprintf("%d periods, %.3g moves, %.0f s on %d worker(s)", r.Periods,
		float64(r.Moves), r.Wall, r.Cores)
	published := base
	published.Quantity = run + ", against the published"
	published.Reference = r.Published
	published.Source = "M. M. Turner et al., Phys. Plasmas 20, 013507 (2013)"
	published.Status = "memory"
	published.Limit, published.LimitKind = publishedLimit, validation.Relative
	published.Note = "the benchmark prescribes a set of cross sections that is not bundled; the " +
		"rows of the other sets show how much the set matters; " + cost
	rows := []validation.Row{published.Judged()}
	if value, ok := independent[fmt.Sprintf("%d %s", r.Case, name)]; ok {
		same := base
		same.Quantity = run + ", against the same tables elsewhere"
		same.Reference, same.ReferenceError = value, independentError*value
		same.Source = "independent program, published rules"
		same.Status = "computed"
		same.Limit, same.LimitKind = independentLimit, validation.Sigma
		same.Note = "the tables differ above 200 eV; " + cost
		rows = append(rows, same.Judged())
	}
	return rows
}
