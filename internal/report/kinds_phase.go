package report

import (
	"math"

	"ionfall/internal/table"
)

// degrees in a radian: phases are shown in degrees of the fundamental.
const degrees = 180 / math.Pi

func phaseKinds() []Kind {
	kind := func(id, title, about, column, label, unit string, signed bool) Kind {
		return Kind{
			ID: id, Title: title, group: groupPhase, About: about,
			build: func(k Kind, runs []*Run, _ Select) ([]Figure, error) {
				value := Axis{Name: column, Label: label, Unit: unit}
				return phaseFigures(k, runs, value, signed)
			},
		}
	}
	return []Kind{
		kind("phase-field", "Electric field over the RF period",
			"Field along x; positive points to the grounded electrode. Grey is zero.",
			"field_Vpm", "field", "V/m", true),
		kind("phase-ionization", "Ionization over the RF period",
			"Ionizing collisions of electrons.",
			"ionization_rate_m3ps", "ionization rate", "1/(m3 s)", false),
		kind("phase-power", "Electron power over the RF period",
			"Power density from the field to the electrons; where it is negative they give power "+
				"back. Grey is zero.",
			"power_electron_Wpm3", "power density", "W/m3", true),
	}
}

// phaseFigures makes a map for each run.
func phaseFigures(k Kind, runs []*Run, value Axis, signed bool) ([]Figure, error) {
	var list []Figure
	for _, r := range runs {
		t, err := tableOf(r, "phases")
		if err != nil {
			return nil, err
		}
		if t == nil {
			continue
		}
		if _, ok := t.Column(value.Name); !ok {
			continue
		}
		m, err := phaseMap(t, value.Name)
		if err != nil {
			return nil, err
		}
		m.Value, m.Signed = value, signed
		f := Figure{
			ID: k.ID, Title: k.Title, Runs: marks([]*Run{r}), Map: m,
			X: Axis{Name: "phase_deg", Label: "phase", Unit: "deg"},
			Y: Axis{
				Name: "x_mm", Label: "x from powered electrode", Unit: "mm",
			},
		}
		f.Alt = mapAlt(&f)
		list = append(list, f)
	}
	return numbered(list, len(runs)), nil
}

func phaseMap(t *table.Table, column string) (*Map, error) {
	m, err := gridMap(t, allRows(t), "phase_rad", "x_m", column, degrees)
	if err != nil {
		return nil, err
	}
	for i := range m.YEdges {
		m.YEdges[i] *= millimetres
	}
	// the first and the last node have half a cell
	n := len(m.YEdges) - 1
	if n > 1 {
		m.YEdges[0] = middle(m.YEdges, 0)
		m.YEdges[n] = middle(m.YEdges, n-1)
	}
	return m, nil
}

func waveKinds() []Kind {
	kind := func(id, title, about string, y Axis, columns ...[2]string) Kind {
		return Kind{
			ID: id, Title: title, About: about, group: groupPhase,
			build: func(k Kind, runs []*Run, _ Select) ([]Figure, error) {
				return waveFigure(k, runs, y, columns)
			},
		}
	}
	return []Kind{
		kind("voltage", "Voltage and plasma potential",
			"Voltage of the powered electrode and potential in the middle of the gap.",
			Axis{Name: "voltage_V", Label: "voltage", Unit: "V"},
			[2]string{"drive_V", "powered electrode"},
			[2]string{"midgap_potential_V", "middle of the gap"}),
		kind("current", "Current", "Current density into the powered electrode.",
			Axis{Name: "current_Apm2", Label: "current density", Unit: "A/m2"},
			[2]string{"current_Apm2", "current"}),
		kind("sheath", "Sheath edges",
			"Width of both sheaths by the criterion of Brinkmann, J. Appl. Phys. 102, 093303 "+
				"(2007).",
			Axis{Name: "width_mm", Label: "sheath width", Unit: "mm"},
			[2]string{"sheath_powered_m", "powered"},
			[2]string{"sheath_grounded_m", "grounded"}),
	}
}

func waveFigure(k Kind, runs []*Run, y Axis, columns [][2]string) ([]Figure, error) {
	f := Figure{
		ID: k.ID, Title: k.Title, Runs: marks(runs), Y: y,
		X: Axis{Name: "phase_deg", Label: "phase", Unit: "deg", From: 0, To: 360},
	}
	factor := 1.0
	if y.Unit == "mm" {
		factor = millimetres
	}
	for i, r := range runs {
		t, err := tableOf(r, "waveforms")
		if err != nil {
			return nil, err
		}
		if t == nil {
			continue
		}
		for _, c := range columns {
			list, err := columnSeries(t, i, "phase_rad", degrees, factor, Select{}, exactly(c[0]))
			if err != nil {
				return nil, err
			}
			for _, s := range list {
				s.Label = c[1]
				f.Series = append(f.Series, s)
			}
		}
	}
	if len(f.Series) == 0 {
		return nil, nil
	}
	f.Alt = altOf(&f)
	return []Figure{f}, nil
}
