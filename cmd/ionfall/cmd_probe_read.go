package main

import (
	"fmt"
	"maps"
	"math"
	"path/filepath"
	"slices"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/internal/config"
	"ionfall/internal/probe"
	"ionfall/internal/progress"
	"ionfall/internal/store"
)

func (p *program) probeReadCommand() *cli.Command {
	return &cli.Command{
		Name:  "read",
		Usage: "reduce sweeps of a Langmuir probe to densities, temperature and potentials",
		ArgsUsage: "SWEEPS.csv --tip-radius R --tip-length L --gas GAS [--pressure P] ...\n" +
			"   or: ionfall probe read PROBE.yaml",
		Description: `The sweeps are a text file whose header names voltage and current with their units,
such as voltage_V,current_A; PROBE.yaml describes one or several such files. The tip is a thin
cylinder. With --out, DIR gets figures of each step and the tables behind them.`,
		Flags: []cli.Flag{
			measureFlag("tip-radius", "`RADIUS` of the tip, as 50 um", config.MeasureLength),
			measureFlag("tip-length", "`LENGTH` of the tip, as 8 mm", config.MeasureLength),
			&cli.StringFlag{Name: "gas", Usage: "the `GAS`, whose ions are collected"},
			measureFlag("pressure", "`PRESSURE`, to judge collisions", config.MeasurePressure),
			measureFlag("gas-temperature", "`T` of the gas (default: 300 K)",
				config.MeasureTemperature),
			measureFlag("ion-temperature", "`T` of the ions (default: that of the gas)",
				config.MeasureTemperature),
			measureFlag("resistance", "`R` in series with the tip (default: 0 Ohm)",
				config.MeasureResistance),
			measureFlag("rf-amplitude", "residual RF `VOLTAGE` between tip and plasma, if it is known",
				config.MeasureVoltage),
			&cli.StringFlag{
				Name: "sign", Usage: "what is positive: electron or ion current `SIGN` (default: auto)",
			},
			&cli.StringFlag{Name: "voltage-column", Usage: "`NAME` of the column of the voltage"},
			&cli.StringFlag{Name: "current-column", Usage: "`NAME` of the column of the current"},
			&cli.StringFlag{Name: "voltage-unit", Usage: "`UNIT` of the voltage: V, mV or kV"},
			&cli.StringFlag{Name: "current-unit", Usage: "`UNIT` of the current: A, mA, uA or nA"},
			libraryFlag(alsoLibrary),
			&cli.StringFlag{Name: "seed", Usage: "random numbers number `N` (default: 1)"},
			&cli.StringFlag{
				Name: "out", Usage: "put figures and tables into the folder `DIR`, which must not exist",
			},
			jsonFlag("print the results as JSON"),
		},
		Action: p.probeRead,
	}
}

// measureFlag is a flag with a unit, which may stand as a word of its own.
func measureFlag(name, usage string, m config.Measure) cli.Flag {
	return &quantityFlag{&cli.StringFlag{Name: name, Usage: usage}, m.Units()}
}

// measure reads a flag with a unit; absent if it is not given.
func (v *values) measure(flag string, m config.Measure, lo, hi, absent float64) float64 {
	if !v.c.IsSet(flag) {
		return absent
	}
	value, bad := m.Read(v.c.String(flag))
	switch {
	case bad != nil:
		bad.Key = "--" + flag
		v.bad = append(v.bad, bad)
	case !(value >= lo && value <= hi):
		v.fail(flag, v.c.String(flag), fmt.Sprintf("from %g to %g in SI units", lo, hi))
	}
	return value
}

// seed reads the flag.
func (v *values) seed() uint64 { return uint64(max(1, v.integer("seed", maxSeed))) }

// probeSetup reads the flags that describe a probe.
func (v *values) probeSetup() (probe.Setup, probe.Columns) {
	s := probe.Setup{
		Gas: v.text("gas", "the name of a gas"),
		Radius: v.measure("tip-radius", config.MeasureLength, probe.LeastRadius, probe.MostRadius,
			math.NaN()),
		Length: v.measure("tip-length", config.MeasureLength, probe.LeastLength, probe.MostLength,
			math.NaN()),
		Pressure:       v.measure("pressure", config.MeasurePressure, 1e-4, 1e5, 0),
		Temperature:    v.measure("gas-temperature", config.MeasureTemperature, 50, 5000, 300),
		IonTemperature: v.measure("ion-temperature", config.MeasureTemperature, 50, 1e5, 0),
		Resistance:     v.measure("resistance", config.MeasureResistance, 0, probe.MostResistance, 0),
		RF:             v.measure("rf-amplitude", config.MeasureVoltage, 0, probe.MostRF, math.NaN()),
	}
	for _, flag := range []string{"tip-radius", "tip-length", "gas"} {
		if !v.c.IsSet(flag) {
			v.fail(flag, "", "a value: the currents mean nothing without it")
		}
	}
	columns := probe.Columns{
		Voltage: v.c.String("voltage-column"), Current: v.c.String("current-column"),
		VoltageUnit: v.c.String("voltage-unit"), CurrentUnit: v.c.String("current-unit"),
		Sign: v.c.String("sign"),
	}
	words := []string{"", probe.SignAuto, probe.SignElectron, probe.SignIon}
	if !slices.Contains(words, columns.Sign) {
		v.fail("sign", columns.Sign, "electron, ion or auto")
	}
	return s, columns
}

// reducedProbe is a probe with what its sweeps gave.
type reducedProbe struct {
	probe.ProbeDescription
	file   *probe.File
	result *probe.Result
}

func (p *program) probeRead(c *cli.Context) error {
	path, err := argument(c, "file of sweeps", "ionfall probe read sweeps.csv --tip-radius 50 um "+
		"--tip-length 8 mm --gas Ar")
	if err != nil {
		return err
	}
	v := values{c: c}
	list, err := p.probesOf(path, &v)
	if err != nil {
		return err
	}
	library, err := v.gases()
	if err != nil {
		return err
	}
	choices := probe.Choices{Seed: v.seed()}
	if err := v.bad.Err(); err != nil {
		return err
	}
	for i := range list {
		if err := list[i].reduce(library, choices); err != nil {
			return err
		}
	}
	if out := v.text("out", "the name of a folder"); out != "" {
		if err := keepProbes(out, list); err != nil {
			return err
		}
	}
	return p.printProbes(list)
}

// probesOf are those of a description, or the one that the flags describe.
func (p *program) probesOf(path string, v *values) ([]reducedProbe, error) {
	if e := strings.ToLower(filepath.Ext(path)); e == ".yaml" || e == ".yml" {
		d, err := readDescription(path)
		if err != nil {
			return nil, err
		}
		if len(d.Probes) == 0 {
			return nil, usagef("%s describes no probe", path)
		}
		list := make([]reducedProbe, len(d.Probes))
		for i := range d.Probes {
			list[i].ProbeDescription = d.Probes[i]
			list[i].Sweeps = beside(path, d.Probes[i].Sweeps)
		}
		return list, nil
	}
	setup, columns := v.probeSetup()
	return []reducedProbe{{ProbeDescription: probe.ProbeDescription{
		Name: filepath.Base(path), Sweeps: path, Setup: setup, Columns: columns,
		Position: math.NaN(),
	}}}, v.bad.Err()
}

// reduce reads the sweeps and reduces them.
func (r *reducedProbe) reduce(library *gases, choices probe.Choices) error {
	err := library.fillGas(&r.Setup, func(hint string) error { return usagef("gas: %s", hint) })
	if err != nil {
		return err
	}
	src, err := readFile(r.Sweeps)
	if err != nil {
		return err
	}
	if r.file, err = probe.ReadSweeps(r.Sweeps, src, r.Columns); err != nil {
		return err
	}
	if r.result, err = probe.Reduce(r.file.Sweeps, &r.Setup, choices); err != nil {
		return usagef("%s: %v", r.Sweeps, err)
	}
	r.result.Notes = append(slices.Clone(r.file.Notes), r.result.Notes...)
	r.result.WidenForArea(r.AreaError)
	return nil
}

// quantityJSON is a quantity; one that is not known is null, with the reason.
type quantityJSON struct {
	Value  store.Number `json:"value"`
	SE     store.Number `json:"se"`
	Unit   string       `json:"unit"`
	Reason string       `json:"reason,omitempty"`
}

func asJSON(q probe.Quantity) quantityJSON {
	return quantityJSON{store.Number(q.Value), store.Number(q.SE), q.Unit, q.Reason}
}

// probeJSON is a reduction as a mapping: quantities by their keys, and what is to know about them.
func (r *reducedProbe) json() map[string]any {
	out := map[string]any{
		"name": r.Name, "shape": r.result.Shape, "cautions": noNil(r.result.Cautions),
		"notes": noNil(r.result.Notes), "sweeps": r.result.Sweeps,
		"fit_chi_square": store.Number(r.result.ChiSquare),
	}
	for _, q := range r.result.Quantities {
		out[q.Key] = asJSON(q.Quantity)
	}
	methods := map[string]quantityJSON{}
	for _, m := range r.result.Methods {
		methods[m.Key] = asJSON(m.Quantity)
	}
	out["methods"] = methods
	return out
}

func noNil(list []string) []string {
	if list == nil {
		return []string{}
	}
	return list
}

func (p *program) printProbes(list []reducedProbe) error {
	if p.asJSON {
		var v any = list[0].json()
		if len(list) > 1 {
			all := make([]map[string]any, len(list))
			for i := range list {
				all[i] = list[i].json()
			}
			v = map[string]any{"probes": all}
		}
		text, err := encodeJSON(v, true)
		if err != nil {
			return err
		}
		return p.print(text)
	}
	var b strings.Builder
	for i := range list {
		if i > 0 {
			b.WriteString("\n")
		}
		b.WriteString(list[i].text())
	}
	b.WriteString("\nErrors are standard errors: of noise, of the choice of form and window, and of " +
		"what the ways\ndisagree about. The definition of temperature is two thirds of the mean " +
		"energy.\n")
	return p.print([]byte(b.String()))
}

// quantityCell is a quantity on a terminal.
func quantityCell(q probe.Quantity) string {
	if !q.Known() {
		return "not known: " + q.Reason
	}
	if math.IsNaN(q.SE) {
		return progress.Digits(q.Value, 3) + ", no error"
	}
	return progress.WithError(q.Value, q.SE)
}

func (r *reducedProbe) text() string {
	rows := [][]string{}
	for _, q := range r.result.Quantities {
		rows = append(rows, []string{q.Label, q.Unit, quantityCell(q.Quantity)})
	}
	text := r.Name + "\n\n" + align(rows)
	rows = nil
	for _, m := range r.result.Methods {
		cell := quantityCell(m.Quantity)
		if m.SE == 0 {
			cell = progress.Digits(m.Value, 3)
		}
		rows = append(rows, []string{"  " + m.Label, m.Unit, cell})
	}
	if len(rows) > 0 {
		text += "\nother ways:\n" + align(rows)
	}
	text += fmt.Sprintf("\nform of the distribution: %s\n", r.result.Shape)
	for _, n := range r.result.Notes {
		text += "note: " + n + "\n"
	}
	for _, c := range r.result.Cautions {
		text += "caution: " + c + "\n"
	}
	return text
}

// keepProbes writes figures, tables and JSON.
func keepProbes(out string, list []reducedProbe) error {
	return keepFolder(out, func(folder *store.Run) error {
		for i := range list {
			r := &list[i]
			prefix := ""
			if len(list) > 1 {
				prefix = columnPart(r.Name) + "_"
			}
			if err := keepReduction(folder, r, prefix); err != nil {
				return err
			}
		}
		return nil
	})
}

// keepFolder makes a results folder whole, or takes it away again.
func keepFolder(out string, fill func(folder *store.Run) error) error {
	folder, err := store.Create(out)
	if err != nil {
		return err
	}
	if err := fill(folder); err != nil {
		return joinClose(err, folder)
	}
	return folder.Commit()
}

func keepReduction(folder *store.Run, r *reducedProbe, prefix string) error {
	figures, err := r.result.Figures()
	if err != nil {
		return err
	}
	for _, name := range slices.Sorted(maps.Keys(figures)) {
		if err := folder.WriteFile(prefix+name, figures[name]); err != nil {
			return err
		}
	}
	meta := map[string]string{"program": "ionfall " + versionText(), "sweeps": r.Sweeps}
	for _, t := range r.result.Tables() {
		t.Name = prefix + t.Name
		if err := folder.WriteTable(t, meta); err != nil {
			return err
		}
	}
	return folder.WriteJSON(prefix+"probe.json", r.json())
}
