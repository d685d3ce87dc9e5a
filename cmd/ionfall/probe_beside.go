package main

import (
	"fmt"
	"path/filepath"

	"ionfall/internal/probe"
	"ionfall/internal/report"
	"ionfall/internal/store"
	"ionfall/internal/table"
)

// recordBeside puts the comparisons into the folders of their runs and makes the reports of those
// anew, which show them. A folder that cannot be written to is said and no more: the comparison
// itself is kept elsewhere.
func (p *program) recordBeside(list []comparedProbe, analysers []comparedAnalyser) {
	var runs []string
	byRun := map[string][]report.Beside{}
	add := func(run string, b report.Beside) {
		if _, ok := byRun[run]; !ok {
			runs = append(runs, run)
		}
		byRun[run] = append(byRun[run], b)
	}
	for i := range list {
		add(list[i].run, list[i].beside())
	}
	for i := range analysers {
		add(analysers[i].run, analysers[i].beside())
	}
	for _, run := range runs {
		page, err := renewReport(run, byRun[run])
		if err != nil {
			p.say(fmt.Sprintf("%s: its report does not show the comparison: %v", run, err))
			continue
		}
		p.say("the report shows it, too: " + page)
	}
}

func renewReport(dir string, list []report.Beside) (page string, err error) {
	if err := report.KeepBeside(dir, list...); err != nil {
		return "", err
	}
	run, err := report.Open(dir)
	if err != nil {
		return "", err
	}
	text, err := report.Page([]*report.Run{run})
	if err != nil {
		return "", err
	}
	folder, _, err := store.Locate(dir)
	if err != nil {
		return "", err
	}
	page = filepath.Join(folder, report.File)
	return page, store.WriteFile(page, text)
}

func besideRows(rows []probe.Row) []report.BesideRow {
	value := func(q probe.Quantity) report.BesideValue {
		return report.BesideValue{
			Value: store.Number(q.Value), SE: store.Number(q.SE), Reason: q.Reason,
		}
	}
	var list []report.BesideRow
	for i := range rows {
		r := &rows[i]
		list = append(list, report.BesideRow{
			Label: r.Label, Unit: r.Unit, Measured: value(r.Measured), Simulated: value(r.Simulated),
			Sigma: store.Number(r.Sigma()),
		})
	}
	return list
}

func (o *comparedProbe) beside() report.Beside {
	b := report.Beside{
		Name: o.Name, Sweeps: filepath.Base(o.Sweeps),
		Where:   fmt.Sprintf("%.4g mm from the powered electrode", 1e3*o.Position),
		Verdict: o.comparison.Verdict, Rows: besideRows(o.comparison.Rows),
		Cautions: o.comparison.Cautions,
	}
	volts := report.Axis{Name: "voltage_V", Label: "voltage of the tip", Unit: "V"}
	energy := report.Axis{Name: "energy_eV", Label: "electron energy", Unit: "eV"}
	if t := o.comparison.Characteristic; t != nil {
		b.Figures = append(b.Figures, report.Figure{
			Title: "measured and synthetic characteristic", X: volts,
			Y: report.Axis{Name: "current_A", Label: "current", Unit: "A"},
			Series: []report.Series{
				besideCurve(t, "measured", "voltage_V", "measured_current_A"),
				besideCurve(t, "simulated plasma", "voltage_V", "synthetic_current_A"),
				besideCurve(t, "the same, plasma potentials aligned", "voltage_V", "aligned_current_A"),
			},
		}, report.Figure{
			Title: "synthetic less measured current", X: volts,
			Y: report.Axis{Name: "difference_sigma", Label: "synthetic less measured, joint errors"},
			Series: []report.Series{
				besideCurve(t, "difference", "voltage_V", "difference_sigma"),
			},
		})
	}
	if t := o.comparison.EEPF; t != nil {
		b.Figures = append(b.Figures, report.Figure{
			Title: "electron energy probability function", X: energy,
			About: "The integral of sqrt(E) times it is 1. Measured points below twice their error, " +
				"which noise hides, are left out here and are in the table of the comparison.",
			Y: report.Axis{Name: "eepf_eVm32", Label: "EEPF", Unit: "eV^-3/2", Log: true},
			Series: []report.Series{
				aboveNoise(besideCurve(t, "measured", "energy_eV", "measured_eVm32")),
				besideCurve(t, "simulated", "energy_eV", "simulated_eVm32"),
			},
		})
	}
	return b
}

// besideCurve takes a curve from a table, with its errors where it has them; what is simulated
// belongs to the run.
func besideCurve(t *table.Table, label, x, y string) report.Series {
	s := report.Series{Label: label}
	if label == "measured" {
		s.Run, s.Dots = -1, true
	}
	values := func(name string) report.Numbers {
		v, err := t.Floats(name)
		if err != nil {
			return nil
		}
		return v
	}
	s.X, s.Y, s.SE = values(x), values(y), values(y+"_se")
	return s
}

// aboveNoise leaves out what a logarithmic scale would show as spikes.
func aboveNoise(s report.Series) report.Series {
	const least = 2
	out := report.Series{Label: s.Label, Run: s.Run, Dots: s.Dots}
	for k, y := range s.Y {
		if k < len(s.SE) && y > least*s.SE[k] {
			out.X, out.Y = append(out.X, s.X[k]), append(out.Y, y)
			out.SE = append(out.SE, s.SE[k])
		}
	}
	return out
}

func (a *comparedAnalyser) beside() report.Beside {
	return report.Beside{
		Name: a.Name, Sweeps: filepath.Base(a.Sweeps), Where: "at the " + a.Electrode + " electrode",
		Verdict: a.comparison.Verdict, Rows: besideRows(a.comparison.Rows),
		Cautions: a.result.Cautions,
		Figures: []report.Figure{{
			Title: "energy of the ions along the axis",
			X:     report.Axis{Name: "energy_eV", Label: "energy along the axis", Unit: "eV"},
			Y:     report.Axis{Name: "distribution_peV", Label: "part of the ions", Unit: "1/eV"},
			Series: []report.Series{
				{
					Label: "measured", Run: -1, Dots: true, X: a.result.Energy, Y: a.result.Distribution,
					SE: a.result.SE,
				},
				{Label: "simulated, seen by the analyser", X: a.result.Energy, Y: a.comparison.Folded},
			},
		}},
	}
}
