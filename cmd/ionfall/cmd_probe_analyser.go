package main

import (
	"fmt"
	"math"
	"path/filepath"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/internal/config"
	"ionfall/internal/probe"
	"ionfall/internal/store"
)

func (p *program) probeAnalyserCommand() *cli.Command {
	return &cli.Command{
		Name:  "analyser",
		Usage: "reduce sweeps of a retarding-field analyser to the energies of ions",
		ArgsUsage: "SWEEPS.csv --grids N --open-fraction PART [--entrance-radius R] ...\n" +
			"   or: ionfall probe analyser PROBE.yaml",
		Description: `The current of the collector against the retarding voltage gives the distribution of
the energy along the axis, -dI/dV, and without a derivative its mean and percentiles. PROBE.yaml
describes analysers under the key analysers; probe compare puts them beside a run.`,
		Flags: []cli.Flag{
			&cli.StringFlag{Name: "grids", Usage: "number `N` of grids before the collector"},
			measureFlag("open-fraction", "open `PART` of each grid, as 80 %", config.MeasureRatio),
			measureFlag("entrance-radius", "`RADIUS` of the entrance, to state a flux",
				config.MeasureLength),
			measureFlag("acceptance", "largest `ANGLE` to the axis that passes, as 30 deg",
				config.MeasureAngle),
			measureFlag("resolution", "full width `E` of what one energy becomes, as 2 eV",
				config.MeasureEnergy),
			measureFlag("electrode-potential", "`V` of the electrode (default: 0 V)",
				config.MeasureVoltage),
			&cli.StringFlag{Name: "seed", Usage: "random numbers number `N` (default: 1)"},
			&cli.StringFlag{Name: "out", Usage: "put figure and table into the folder `DIR`"},
			jsonFlag("print the results as JSON"),
		},
		Action: p.probeAnalyser,
	}
}

// comparedAnalyser is an analyser with its results, and with a run's if there is one.
type comparedAnalyser struct {
	probe.AnalyserDescription
	result     *probe.AnalyserResult
	run        string
	comparison *probe.AnalyserComparison
}

func (p *program) probeAnalyser(c *cli.Context) error {
	path, err := argument(c, "file of sweeps", "ionfall probe analyser rfa.csv --grids 3 "+
		"--open-fraction 80%")
	if err != nil {
		return err
	}
	v := values{c: c}
	var list []comparedAnalyser
	if e := strings.ToLower(filepath.Ext(path)); e == ".yaml" || e == ".yml" {
		d, err := readDescription(path)
		if err != nil {
			return err
		}
		for _, a := range d.Analysers {
			a.Sweeps = beside(path, a.Sweeps)
			list = append(list, comparedAnalyser{AnalyserDescription: a})
		}
		if len(list) == 0 {
			return usagef("%s describes no analyser", path)
		}
	} else {
		list = []comparedAnalyser{{AnalyserDescription: v.analyser(path)}}
	}
	choices := probe.Choices{Seed: v.seed()}
	out := v.text("out", "the name of a folder")
	if err := v.bad.Err(); err != nil {
		return err
	}
	for i := range list {
		if err := list[i].reduce(choices); err != nil {
			return err
		}
	}
	if out != "" {
		if err := keepComparisons(out, nil, list); err != nil {
			return err
		}
	}
	return p.printComparisons(nil, list)
}

// analyser reads the flags that describe one.
func (v *values) analyser(path string) probe.AnalyserDescription {
	for _, flag := range []string{"grids", "open-fraction"} {
		if !v.c.IsSet(flag) {
			v.fail(flag, "", "a value: the flux at the electrode follows from it")
		}
	}
	return probe.AnalyserDescription{
		Name: filepath.Base(path), Sweeps: path,
		Analyser: probe.Analyser{
			Grids:      v.integer("grids", 10),
			Open:       v.measure("open-fraction", config.MeasureRatio, 1e-3, 1, 1),
			Radius:     v.measure("entrance-radius", config.MeasureLength, 1e-6, 1, 0),
			Acceptance: v.measure("acceptance", config.MeasureAngle, 1e-3, math.Pi/2, math.Pi/2),
			Resolution: v.measure("resolution", config.MeasureEnergy, 0, 1e3, 0),
			Potential:  v.measure("electrode-potential", config.MeasureVoltage, -1e5, 1e5, 0),
		},
	}
}

func (a *comparedAnalyser) reduce(choices probe.Choices) error {
	src, err := readFile(a.Sweeps)
	if err != nil {
		return err
	}
	file, err := probe.ReadCollector(a.Sweeps, src, a.Columns)
	if err != nil {
		return err
	}
	a.result, err = probe.ReduceAnalyser(file.Sweeps, &a.Analyser, choices)
	if err != nil {
		return usagef("%s: %v", a.Sweeps, err)
	}
	a.result.Notes = append(file.Notes, a.result.Notes...)
	return nil
}

// compareAnalysers reduces the analysers of a description and puts a run beside them.
func compareAnalysers(d *probe.Description, file, folder string, choices probe.Choices) (
	[]comparedAnalyser, error,
) {
	var list []comparedAnalyser
	for _, description := range d.Analysers {
		a := comparedAnalyser{AnalyserDescription: description}
		a.Sweeps = beside(file, a.Sweeps)
		var err error
		a.run, err = runOf(&a.Placed, a.Run, folder, probe.At(a.Pressure, a.Inputs))
		if err != nil {
			return nil, err
		}
		if err := a.reduce(choices); err != nil {
			return nil, err
		}
		if err := a.compare(); err != nil {
			return nil, err
		}
		list = append(list, a)
	}
	return list, nil
}

func (a *comparedAnalyser) compare() error {
	run, err := openRun(a.run)
	if err != nil {
		return err
	}
	ions, err := run.arrival(a.Electrode)
	if err != nil {
		return err
	}
	a.comparison, err = probe.CompareAnalyser(a.result, &a.Analyser, ions,
		run.relativeError("ion_flux_m2ps."+a.Electrode+".all"),
		run.relativeError("ion_mean_energy_eV."+a.Electrode+".all"), run.summary.Verdict)
	return err
}

// arrival reads what hits an electrode.
func (r *finishedRun) arrival(electrode string) (*probe.IonArrival, error) {
	t, err := store.ReadTable(filepath.Join(r.dir, "ion_angle.parquet"))
	if err != nil {
		return nil, err
	}
	return probe.NewIonArrival(t, electrode)
}

func (r *finishedRun) relativeError(path string) float64 {
	v, ok := r.summary.Lookup(path)
	if !ok {
		return math.NaN()
	}
	return v.SE / math.Abs(v.Value)
}

func (a *comparedAnalyser) json() map[string]any {
	out := map[string]any{
		"name": a.Name, "cautions": noNil(a.result.Cautions), "notes": noNil(a.result.Notes),
	}
	for _, q := range a.result.Quantities {
		out[q.Key] = asJSON(q.Quantity)
	}
	if a.comparison != nil {
		out["run"], out["verdict"] = a.run, a.comparison.Verdict
		out["quantities"] = rowsJSON(a.comparison.Rows)
	}
	return out
}

func (a *comparedAnalyser) text() string {
	rows := [][]string{}
	text := a.Name + "\n\n"
	if a.comparison != nil {
		text = fmt.Sprintf("%s, at the %s electrode, against %s\n\n", a.Name, a.Electrode, a.run)
		rows = append(rows, []string{"", "", "measured", "simulated", "sigma"})
		for i := range a.comparison.Rows {
			r := &a.comparison.Rows[i]
			rows = append(rows, []string{
				r.Label, r.Unit, quantityCell(r.Measured), quantityCell(r.Simulated),
				fmt.Sprintf("%+.1f", r.Sigma()),
			})
		}
		text += align(rows) + "\n" + a.comparison.Verdict + "\n"
	} else {
		for _, q := range a.result.Quantities {
			rows = append(rows, []string{q.Label, q.Unit, quantityCell(q.Quantity)})
		}
		text += align(rows)
	}
	for _, n := range a.result.Notes {
		text += "note: " + n + "\n"
	}
	for _, c := range a.result.Cautions {
		text += "caution: " + c + "\n"
	}
	return text
}

// keep writes figure and table.
func (a *comparedAnalyser) keep(folder *store.Run, several bool, meta map[string]string) (
	*pagePart, error,
) {
	prefix := ""
	if several {
		prefix = columnPart(a.Name) + "_"
	}
	curves := []probe.Curve{{
		Label: "measured", X: a.result.Energy, Y: a.result.Distribution, Points: true,
	}}
	t := a.result.Table()
	if a.comparison != nil {
		curves = append(curves, probe.Curve{
			Label: "simulated, seen by the analyser", X: a.result.Energy, Y: a.comparison.Folded,
		})
		t.AddFloat("simulated_peV", "", "the run's, seen by the analyser", a.comparison.Folded)
	}
	t.Name = prefix + t.Name
	if err := folder.WriteTable(t, meta); err != nil {
		return nil, err
	}
	svg, err := probe.Figure("energy of the ions along the axis", "energy [eV]",
		"part per eV [1/eV]", false, curves...)
	if err != nil {
		return nil, err
	}
	return keepPart(folder, prefix, a.Name, a.text(), map[string][]byte{"analyser.svg": svg})
}
