// Command fastpath compares what numerics: auto chooses with a resolved run of the same discharge:
//
//	go run ./bench/fastpath [-only NAME,...] [-cores N] [-dir DIR] [-auto]
//
// It is run in the folder of go.mod and takes hours of processor time. Each discharge is run twice,
// from a cold start, to 1 % of standard error in mean ion energy and ion flux; results are merged
// into bench/fastpath.json as soon as a run ends, and bench/speed makes a table of them. With -auto
// only the automatic runs are made anew.
package main

import (
	"context"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"ionfall/internal/run"
	"ionfall/internal/store"
)

const resultsFile = "bench/fastpath.json"

// discharge is one case; numerics are added to its input.
type discharge struct {
	name, title string
	input       string
	// resolved numerics with which the discharge is known; "" for finer ones than the automatic.
	resolved string
}

func plates(gas, pressure, gap, frequency, amplitude string) string {
	return fmt.Sprintf("gap: %s\ngas: {pressure: %s, temperature: 300 K, mixture: {%s: 1}}\n"+
		"drive: {tones: [{frequency: %s, amplitude: %s}]}\n"+
		"accuracy: {ion_energy: 1 %%, ion_flux: 1 %%}\n", gap, pressure, gas, frequency, amplitude)
}

// numerics are fully resolved ones, without projections of the density.
func numerics(cells, steps, perCell int) string {
	return fmt.Sprintf("{scheme: momentum_conserving, cells: %d, steps_per_period: %d, "+
		"particles_per_cell: %d, ion_substeps: 1, density_extrapolation: off}", cells, steps, perCell)
}

// discharges are two for the time to an answer, and six further ones.
func discharges() []discharge {
	return []discharge{
		{
			"helium-4pa", "helium, 4 Pa, 67 mm, 450 V",
			plates("He", "3.993 Pa", "67 mm", "13.56 MHz", "450 V"), numerics(128, 400, 512),
		},
		{
			"argon-5pa", "argon, 5 Pa, 40 mm, 250 V",
			plates("Ar", "5 Pa", "40 mm", "13.56 MHz", "250 V"), numerics(256, 1200, 400),
		},
		{
			"argon-20pa", "argon, 20 Pa, 40 mm, 150 V",
			plates("Ar", "20 Pa", "40 mm", "13.56 MHz", "150 V"), "",
		},
		{
			"argon-27mhz", "argon, 5 Pa, 40 mm, 100 V at 27.12 MHz",
			plates("Ar", "5 Pa", "40 mm", "27.12 MHz", "100 V"), "",
		},
		{
			"helium-13pa", "helium, 13.3 Pa, 67 mm, 200 V",
			plates("He", "13.3 Pa", "67 mm", "13.56 MHz", "200 V"), "",
		},
		{
			"helium-40pa", "helium, 40 Pa, 67 mm, 150 V",
			plates("He", "40 Pa", "67 mm", "13.56 MHz", "150 V"), "",
		},
		{
			"argon-1pa", "argon, 1 Pa, 60 mm, 250 V",
			plates("Ar", "1 Pa", "60 mm", "13.56 MHz", "250 V"), "",
		},
		{
			"argon-100pa", "argon, 100 Pa, 25 mm, 120 V",
			plates("Ar", "100 Pa", "25 mm", "13.56 MHz", "120 V"), "",
		},
	}
}

// Entry is what two runs of a discharge gave.
type Entry struct {
	Name     string `json:"name"`
	Title    string `json:"title"`
	Auto     *Side  `json:"auto,omitempty"`
	Resolved *Side  `json:"resolved,omitempty"`
}

// Side is one run: its numerics, cost and results by path.
type Side struct {
	Numerics map[string]any         `json:"numerics"`
	Verdict  string                 `json:"verdict"`
	CPU      float64                `json:"cpu_s"`
	Periods  float64                `json:"periods"`
	Results  map[string]store.Value `json:"results"`
}

// paths are the results that are compared.
func paths() []string {
	return []string{
		"ion_mean_energy_eV.grounded.all", "ion_flux_m2ps.grounded.all", "power_Wpm2.electron",
		"power_Wpm2.total", "electron_density_center_m3", "electron_temperature_center_eV",
	}
}

func main() {
	only := flag.String("only", "", "names of the discharges, with commas; all if empty")
	cores := flag.Int("cores", 0, "workers of a run; 0 for all processors")
	dir := flag.String("dir", "results/fastpath", "folder of the runs; finished ones are kept")
	auto := flag.Bool("auto", false, "make only the automatic runs")
	flag.Parse()
	if err := compare(*only, *dir, *cores, *auto); err != nil {
		fmt.Fprintln(os.Stderr, "fastpath:", err)
		os.Exit(1)
	}
}

func compare(only, dir string, cores int, auto bool) error {
	for _, d := range discharges() {
		if only != "" && !slices.Contains(strings.Split(only, ","), d.name) {
			continue
		}
		side, err := d.run(filepath.Join(dir, d.name+"-auto"), "auto", cores)
		if err != nil {
			return err
		}
		if err := merge(d, func(e *Entry) { e.Auto = side }); err != nil {
			return err
		}
		if auto {
			continue
		}
		side, err = d.run(filepath.Join(dir, d.name+"-resolved"), d.finer(side), cores)
		if err != nil {
			return err
		}
		if err := merge(d, func(e *Entry) { e.Resolved = side }); err != nil {
			return err
		}
	}
	return nil
}

// finer returns the resolved numerics, or such with a quarter of the automatic cell size, two
// thirds of the step, ions moved every fourth step, and twice the particles, momentum conserving.
func (d discharge) finer(auto *Side) string {
	if d.resolved != "" {
		return d.resolved
	}
	get := func(key string) float64 { return auto.Numerics[key].(float64) }
	cells := 4 * get("cells")
	steps := 4 * int(1.5*get("steps_per_period")/4)
	perCell := int(2*get("particles_per_cell")*get("cells")/cells + 0.5)
	return fmt.Sprintf("{scheme: momentum_conserving, cells: %g, steps_per_period: %d, "+
		"particles_per_cell: %d, ion_substeps: 4}", cells, steps, perCell)
}

// run makes one run, or reads it if it is there.
func (d discharge) run(dir, numerics string, cores int) (*Side, error) {
	summary, err := store.ReadSummary(filepath.Join(dir, "summary.json"))
	if errors.Is(err, fs.ErrNotExist) {
		var plan *run.Plan
		input := fmt.Sprintf("title: %s\n%snumerics: %s\n", d.title, d.input, numerics)
		if plan, err = run.PrepareBytes(d.name+".yaml", []byte(input)); err != nil {
			return nil, err
		}
		fmt.Fprintf(os.Stderr, "%s: %s\n", d.name, numerics)
		summary, _, err = run.Run(context.Background(), plan, run.Options{Out: dir, Cores: cores})
	}
	if err != nil {
		return nil, fmt.Errorf("%s: %w", d.name, err)
	}
	// As a file has it: numbers are float64 then, whether it was read or not.
	data, err := json.Marshal(summary.Provenance)
	if err != nil {
		return nil, err
	}
	var provenance struct {
		CPU      float64        `json:"cpu_s"`
		Periods  float64        `json:"periods"`
		Numerics map[string]any `json:"numerics"`
	}
	if err := json.Unmarshal(data, &provenance); err != nil {
		return nil, err
	}
	delete(provenance.Numerics, "reasons")
	s := &Side{
		Numerics: provenance.Numerics, Verdict: summary.Verdict, CPU: provenance.CPU,
		Periods: provenance.Periods, Results: map[string]store.Value{},
	}
	for _, path := range paths() {
		v, ok := summary.Lookup(path)
		if !ok {
			return nil, fmt.Errorf("%s: no result %s", d.name, path)
		}
		s.Results[path] = v
	}
	return s, nil
}

// merge enters a run into the results file.
func merge(d discharge, set func(e *Entry)) error {
	var list []Entry
	data, err := os.ReadFile(resultsFile)
	if err == nil {
		err = json.Unmarshal(data, &list)
	}
	if err != nil && !errors.Is(err, fs.ErrNotExist) {
		return fmt.Errorf("%s: %w", resultsFile, err)
	}
	i := slices.IndexFunc(list, func(e Entry) bool { return e.Name == d.name })
	if i < 0 {
		list = append(list, Entry{Name: d.name})
		i = len(list) - 1
	}
	list[i].Title = d.title
	set(&list[i])
	if data, err = json.MarshalIndent(list, "", "  "); err != nil {
		return err
	}
	return os.WriteFile(resultsFile, append(data, '\n'), 0o644)
}
