package probe

import (
	"math"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/config"
)

// AnalyserDescription is a retarding-field analyser with its sweeps.
type AnalyserDescription struct {
	Name      string
	Sweeps    string
	Electrode string // behind which it sits
	Run       string
	Columns   Columns
	Analyser  Analyser
	// Pressure [Pa], 0 if it is not stated, and Inputs tell the point of a scan.
	Pressure float64
	Inputs   []Condition

	Placed
}

func analyserKeys() []string {
	return []string{
		"name", "sweeps", "electrode", "grids", "open_fraction", "entrance_radius", "acceptance",
		"resolution", "electrode_potential", "columns", "run",
		"pressure", "inputs",
	}
}

func (d *describer) analyser(n *yaml.Node, path string) AnalyserDescription {
	a := AnalyserDescription{
		Name: path, Electrode: "grounded", Placed: placed(d.file, n),
		Analyser: Analyser{Grids: 1, Open: 1, Acceptance: math.Pi / 2},
	}
	given := map[string]bool{}
	d.mapping(n, path, analyserKeys(), func(key string, v *yaml.Node) {
		given[key] = true
		a.pos[key] = [2]int{v.Line, v.Column}
		d.analyserValue(&a, key, v, path+"."+key)
	})
	if n.Kind == yaml.MappingNode {
		for _, key := range []string{"sweeps", "grids", "open_fraction"} {
			if !given[key] {
				d.fail(n, path+"."+key, "nothing", "a value: the key is needed", "")
			}
		}
	}
	return a
}

func (d *describer) analyserValue(a *AnalyserDescription, key string, v *yaml.Node, path string) {
	switch key {
	case "name":
		a.Name = d.text(v, path)
	case "sweeps":
		a.Sweeps = d.text(v, path)
	case "run":
		a.Run = d.text(v, path)
	case "pressure":
		a.Pressure = d.pressureOf(v, path)
	case "inputs":
		a.Inputs = d.conditions(v, path)
	case "electrode":
		a.Electrode = d.choice(v, path, "powered", "grounded")
	case "grids":
		a.Analyser.Grids = d.integer(v, path, 1, 10)
	case "open_fraction":
		a.Analyser.Open = d.quantity(v, path, config.MeasureRatio, 1e-3, 1)
	case "entrance_radius":
		a.Analyser.Radius = d.quantity(v, path, config.MeasureLength, 1e-6, 1)
	case "acceptance":
		a.Analyser.Acceptance = d.quantity(v, path, config.MeasureAngle, 1e-3, 1.571)
	case "resolution":
		a.Analyser.Resolution = d.quantity(v, path, config.MeasureEnergy, 0, 1e3)
	case "electrode_potential":
		a.Analyser.Potential = d.quantity(v, path, config.MeasureVoltage, -1e5, 1e5)
	case "columns":
		d.columns(v, path, &a.Columns)
	}
}
