package report

import (
	"slices"
	"strings"

	"ionfall/internal/table"
)

func historyKinds() []Kind {
	kind := func(id, title, about string, y Axis, take func(string) (string, bool)) Kind {
		return Kind{
			ID: id, Title: title, group: groupHistory,
			About: about + " One value an RF period; single periods have no error. Shaded are the " +
				"periods before averaging began, which no result contains.",
			build: func(k Kind, runs []*Run, s Select) ([]Figure, error) {
				return historyFigure(k, runs, s, y, take)
			},
		}
	}
	return []Kind{
		kind("history-content", "Ions in the gap", "Ions in the gap per area of electrode.",
			Axis{Name: "ion_content_pm2", Label: "ions per area", Unit: "1/m2"},
			exactly("ion_content_pm2")),
		kind("history-flux", "Ion flux, period by period", "Ions that hit each electrode.",
			Axis{Name: "ion_flux_m2ps", Label: "ion flux", Unit: "1/(m2 s)"},
			around("ion_flux_", "_m2ps")),
		kind("history-energy", "Mean ion energy, period by period",
			"Mean energy of the ions that hit each electrode.",
			Axis{Name: "ion_mean_energy_eV", Label: "mean ion energy", Unit: "eV"},
			around("ion_mean_energy_", "_eV")),
		kind("history-particles", "Simulated particles", "Number of simulated particles.",
			Axis{Name: "particles", Label: "simulated particles"},
			func(name string) (string, bool) {
				return name, name == "electrons" || name == "ions"
			}),
	}
}

func around(prefix, suffix string) func(string) (string, bool) {
	return func(name string) (string, bool) {
		rest, ok := strings.CutPrefix(name, prefix)
		if !ok {
			return "", false
		}
		return strings.CutSuffix(rest, suffix)
	}
}

func historyFigure(k Kind, runs []*Run, s Select, y Axis, take func(string) (string, bool),
) ([]Figure, error) {
	f := Figure{
		ID: k.ID, Title: k.Title, Runs: marks(runs), Y: y,
		X: Axis{Name: "period", Label: "RF period"},
	}
	for i, r := range runs {
		t, err := tableOf(r, "history")
		if err != nil {
			return nil, err
		}
		if t == nil {
			continue
		}
		periods, err := t.Ints("period")
		if err != nil {
			return nil, err
		}
		for _, c := range t.Columns {
			name, ok := take(c.Name)
			if !ok || c.Text != nil || !fits(s.Electrode, name) && s.Electrode != "" {
				continue
			}
			if name == "" {
				name = y.Label
			}
			f.Series = append(f.Series, historySeries(name, i, periods, c))
		}
		if len(runs) == 1 {
			f.Bands = settlingBand(t, periods)
		}
	}
	if len(f.Series) == 0 {
		return nil, nil
	}
	f.Alt = altOf(&f)
	if len(f.Bands) > 0 {
		f.Alt += " Averaging begins after period " + short(f.Bands[0].To) + "."
	}
	return []Figure{f}, nil
}

func historySeries(name string, run int, periods []int64, c table.Column) Series {
	s := Series{Label: name, Run: run}
	for i, p := range periods {
		var v float64
		if c.Float != nil {
			v = c.Float[i]
		} else {
			v = float64(c.Int[i])
		}
		s.X, s.Y = append(s.X, float64(p)), append(s.Y, v)
	}
	return s
}

// settlingBand is the time before averaging.
func settlingBand(t *table.Table, periods []int64) []Band {
	stages, err := t.Texts("stage")
	if err != nil || len(stages) == 0 {
		return nil
	}
	last := len(stages)
	for i, stage := range slices.Backward(stages) {
		if stage != "averaging" {
			break
		}
		last = i
	}
	if last == 0 {
		return nil
	}
	return []Band{{From: 0, To: float64(periods[last-1]), Label: "pilot and settling"}}
}
