package report

import (
	"slices"
	"strings"

	"ionfall/internal/table"
)

// millimetres in a metre: lengths are shown in mm.
const millimetres = 1e3

func gapKinds() []Kind {
	profile := func(id, title, about string, y Axis, take func(name string) (string, bool)) Kind {
		return Kind{
			ID: id, Title: title, About: about + " Averages over time.", group: groupGap,
			build: func(k Kind, runs []*Run, s Select) ([]Figure, error) {
				return profileFigure(k, runs, s, y, take)
			},
		}
	}
	return []Kind{
		profile("potential", "Potential", "Electric potential; the grounded electrode is 0.",
			Axis{Name: "potential_V", Label: "potential", Unit: "V"}, exactly("potential_V")),
		profile("density", "Densities", "Number density of every kind of charged particle.",
			Axis{Name: "density_m3", Label: "density", Unit: "1/m3"},
			func(name string) (string, bool) { return strings.CutSuffix(name, "_density_m3") }),
		profile("temperature", "Electron temperature", "Two thirds of the mean electron energy.",
			Axis{Name: "electron_temperature_eV", Label: "electron temperature", Unit: "eV"},
			exactly("electron_temperature_eV")),
		profile("ionization", "Ionization rate", "Where electrons ionize the gas.",
			Axis{Name: "ionization_rate_m3ps", Label: "ionization rate", Unit: "1/(m3 s)"},
			exactly("ionization_rate_m3ps")),
		profile("power", "Power density", "Power from the field to each kind of particle.",
			Axis{Name: "power_Wpm3", Label: "power density", Unit: "W/m3"}, powerColumn),
	}
}

func exactly(column string) func(string) (string, bool) {
	return func(name string) (string, bool) {
		return "", name == column
	}
}

func powerColumn(name string) (string, bool) {
	rest, is := strings.CutPrefix(name, "power_")
	if !is {
		return "", false
	}
	return strings.CutSuffix(rest, "_Wpm3")
}

// speciesName undoes what a column name cannot hold.
func speciesName(column string) string {
	return strings.NewReplacer("_plus", "+", "_minus", "-").Replace(column)
}

func profileFigure(k Kind, runs []*Run, s Select, y Axis, take func(string) (string, bool),
) ([]Figure, error) {
	f := Figure{
		ID: k.ID, Title: k.Title, Runs: marks(runs), Y: y,
		X: Axis{Name: "x_mm", Label: "x from powered electrode", Unit: "mm"},
	}
	for i, r := range runs {
		t, err := tableOf(r, "profiles")
		if err != nil {
			return nil, err
		}
		if t == nil {
			continue
		}
		list, err := columnSeries(t, i, "x_m", millimetres, 1, s, take)
		if err != nil {
			return nil, err
		}
		f.Series = append(f.Series, list...)
	}
	if len(f.Series) == 0 {
		return nil, nil
	}
	for i := range f.Series {
		if f.Series[i].Label == "" {
			f.Series[i].Label = y.Label
		}
	}
	f.Alt = altOf(&f)
	return []Figure{f}, nil
}

// columnSeries makes a curve of every column that take accepts, over the column x.
func columnSeries(t *table.Table, run int, x string, xFactor, yFactor float64, s Select,
	take func(string) (string, bool),
) ([]Series, error) {
	rows := allRows(t)
	xs, err := pick(t, x, rows, xFactor)
	if err != nil {
		return nil, err
	}
	var list []Series
	for _, c := range t.Columns {
		name, ok := take(c.Name)
		if !ok || strings.HasSuffix(c.Name, "_se") || c.Float == nil {
			continue
		}
		name = speciesName(name)
		if name != "" && !fits(s.Species, name) {
			continue
		}
		y, err := pick(t, c.Name, rows, yFactor)
		if err != nil {
			return nil, err
		}
		list = append(list, Series{
			Label: name, Run: run, X: slices.Clone(xs), Y: y,
			SE: errorsOf(t, c.Name, rows, yFactor),
		})
	}
	return list, nil
}
