package probe

import (
	"math"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/config"
)

// Limits of what describes a probe, in SI units.
const (
	LeastRadius    = 1e-7
	MostRadius     = 5e-3
	LeastLength    = 1e-4
	MostLength     = 0.5
	MostResistance = 1e6
	MostRF         = 1e3
)

func probeKeys() []string {
	return []string{
		"name", "sweeps", "position", "orientation", "tip_radius", "tip_length", "gas", "pressure",
		"gas_temperature", "resistance", "rf_amplitude", "area_error", "sign", "columns", "run",
		"inputs", "ion_temperature",
	}
}

// probe reads one probe.
func (d *describer) probe(n *yaml.Node, path string) ProbeDescription {
	p := ProbeDescription{
		Name: path, Placed: placed(d.file, n),
		Position: math.NaN(), Setup: Setup{Temperature: 300, RF: math.NaN()},
	}
	given := map[string]bool{}
	d.mapping(n, path, probeKeys(), func(key string, v *yaml.Node) {
		given[key] = true
		p.pos[key] = [2]int{v.Line, v.Column}
		d.probeValue(&p, key, v, path+"."+key)
	})
	if n.Kind == yaml.MappingNode {
		for _, key := range []string{"sweeps", "tip_radius", "tip_length", "gas"} {
			if !given[key] {
				d.fail(n, path+"."+key, "nothing", "a value: the key is needed", "")
			}
		}
	}
	return p
}

func (d *describer) probeValue(p *ProbeDescription, key string, v *yaml.Node, path string) {
	s := &p.Setup
	switch key {
	case "name":
		p.Name = d.text(v, path)
	case "sweeps":
		p.Sweeps = d.text(v, path)
	case "run":
		p.Run = d.text(v, path)
	case "gas":
		s.Gas = d.text(v, path)
	case "position":
		p.Position = d.quantity(v, path, config.MeasureLength, 0, 10)
	case "orientation":
		p.Across = d.choice(v, path, "parallel", "across") == "across"
	case "tip_radius":
		s.Radius = d.quantity(v, path, config.MeasureLength, LeastRadius, MostRadius)
	case "tip_length":
		s.Length = d.quantity(v, path, config.MeasureLength, LeastLength, MostLength)
	case "pressure":
		s.Pressure = d.pressureOf(v, path)
	case "inputs":
		p.Inputs = d.conditions(v, path)
	case "gas_temperature":
		s.Temperature = d.quantity(v, path, config.MeasureTemperature, 50, 5000)
	case "ion_temperature":
		s.IonTemperature = d.quantity(v, path, config.MeasureTemperature, 50, 1e5)
	case "resistance":
		s.Resistance = d.quantity(v, path, config.MeasureResistance, 0, MostResistance)
	case "rf_amplitude":
		s.RF = d.quantity(v, path, config.MeasureVoltage, 0, MostRF)
	case "area_error":
		p.AreaError = d.quantity(v, path, config.MeasureRatio, 0, 1)
	case "sign":
		p.Columns.Sign = d.choice(v, path, SignAuto, SignElectron, SignIon)
	case "columns":
		d.columns(v, path, &p.Columns)
	}
}

// columns reads the names and units of columns.
func (d *describer) columns(n *yaml.Node, path string, c *Columns) {
	d.mapping(n, path, []string{"voltage", "current", "sweep", "voltage_unit", "current_unit"},
		func(key string, v *yaml.Node) {
			text := d.text(v, path+"."+key)
			switch key {
			case "voltage":
				c.Voltage = text
			case "current":
				c.Current = text
			case "sweep":
				c.Sweep = text
			case "voltage_unit":
				c.VoltageUnit = text
			case "current_unit":
				c.CurrentUnit = text
			}
		})
}
