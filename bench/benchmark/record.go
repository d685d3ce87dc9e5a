package main

import (
	"encoding/json"
	"fmt"
	"math"
	"os"
	"strings"

	"ionfall/internal/validation"
)

// independent are mid-plane densities of an independent program with the same sets of tables and
// the published rules (computed; six runs of case 1 scattered by 0.8 %, taken as the error of one).
// Its helium set differs from the default one above 200 eV, where effective minus inelastic
// is noise and ours goes over to first Born values; it is the set phelps.
var independent = map[string]float64{
	"1 default": 0.208e15, "1 phelps": 0.208e15, "1 phelps-beb": 0.217e15, "1 estimate": 0.165e15,
	"2 estimate": 0.91e15,
}

const (
	independentError = 0.008
	publishedLimit   = 0.02 // the pass band of a published repetition (Juhasz et al. 2021)
	independentLimit = 4    // joint standard errors
)

// publishedNote is what was found about the difference from the published values.
const publishedNote = "the benchmark prescribes a set of cross sections that is not bundled. " +
	"Tested, case 1: four bundled sets span 1.7 to 2.2e14, and an independent program finds the " +
	"same with the same sets (3 % less on average) and 1.3 to 2.2e14 with others; the elastic " +
	"cross section above 15 eV counts by a power of about 2.3. Not tested: the prescribed set; "

// meanNote is what was found about the difference from the independent program.
const meanNote = "tested, means of 512 periods: set phelps (2.156 +- 0.006)e14, with velocities " +
	"left half a step behind at collisions, as is usual, (2.123 +- 0.005)e14, 1.6 +- 0.4 % less: " +
	"if the other program does so, half of the difference comes from this. The very rows of the " +
	"other program (elastic up to 2.4 % larger between 26 and 95 eV) give (2.174 +- 0.008)e14, " +
	"0.8 +- 0.4 % more. The rest, 2.3 +- 0.9 %, is not explained"

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
	if err := validation.Merge(path, rows...); err != nil {
		return err
	}
	all, err := validation.Read(path)
	if err != nil {
		return err
	}
	if mean, ok := meanRow(all); ok {
		return validation.Merge(path, mean)
	}
	return nil
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
	published.Note = publishedNote + cost
	rows := []validation.Row{published.Judged()}
	if value, ok := independent[fmt.Sprintf("%d %s", r.Case, name)]; ok {
		same := base
		same.Quantity = run + sameTables
		same.Reference, same.ReferenceError = value, independentError*value
		same.Source = "independent program, published rules"
		same.Status = "computed"
		same.Limit, same.LimitKind = independentLimit, validation.Sigma
		same.Note = cost
		if name == "default" {
			same.Note = "the tables differ above 200 eV; " + cost
		}
		rows = append(rows, same.Judged())
	}
	return rows
}

const (
	sameTables = ", against the same tables elsewhere"
	meanOfRuns = "ion density over that of the same tables elsewhere, mean of all runs"
)

// meanRow asks whether the runs of case 1 differ from the independent program's as a whole, where
// each alone does not: runs with one set have one reference, whose error they share.
func meanRow(rows []validation.Row) (validation.Row, bool) {
	var n, sum, ours float64
	shared := map[float64]float64{} // number of runs by reference
	row := validation.Row{
		Quantity: meanOfRuns, Reference: 1, Source: "independent program, published rules",
		Status: "computed", Limit: independentLimit, LimitKind: validation.Sigma,
	}
	for _, r := range rows {
		if r.Section != "helium benchmark, case 1" || !strings.HasSuffix(r.Quantity, sameTables) {
			continue
		}
		row.Section, row.Seed = r.Section, r.Seed
		n++
		sum += r.Ours / r.Reference
		ours += r.OursError * r.OursError / (r.Reference * r.Reference)
		shared[r.Reference]++
	}
	if n < 2 {
		return row, false
	}
	reference := 0.0
	for _, count := range shared {
		reference += count * count * independentError * independentError
	}
	row.Ours, row.OursError = sum/n, math.Sqrt(ours)/n
	row.ReferenceError = math.Sqrt(reference) / n
	row.Note = fmt.Sprintf("%g runs, %d references; %s", n, len(shared), meanNote)
	return row.Judged(), true
}
