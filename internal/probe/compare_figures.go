package probe

import "ionfall/internal/table"

// Figures of a comparison as SVG, by the name of the file.
func (c *Comparison) Figures() (map[string][]byte, error) {
	if c.Characteristic == nil {
		return nil, nil
	}
	get := func(t *table.Table, name string) []float64 {
		col, _ := t.Column(name)
		return col.Float
	}
	volts := get(c.Characteristic, "voltage_V")
	energy := get(c.EEPF, "energy_eV")
	out := map[string][]byte{}
	for _, f := range []struct {
		name, title, x, y string
		log               bool
		curves            []Curve
	}{
		{
			"comparison_current.svg", "measured and synthetic characteristic", "voltage [V]",
			"current [A]", false,
			[]Curve{
				{"measured", volts, get(c.Characteristic, "measured_current_A"), true},
				{"simulated plasma", volts, get(c.Characteristic, "synthetic_current_A"), false},
				{
					"the same, potentials aligned", volts, get(c.Characteristic, "aligned_current_A"),
					false,
				},
			},
		},
		{
			"comparison_eepf.svg", "electron energy probability function", "energy [eV]",
			"EEPF [eV^-3/2]", true,
			[]Curve{
				{"measured", energy, get(c.EEPF, "measured_eVm32"), true},
				{"simulated", energy, get(c.EEPF, "simulated_eVm32"), false},
			},
		},
	} {
		svg, err := Figure(f.title, f.x, f.y, f.log, f.curves...)
		if err != nil {
			return nil, err
		}
		out[f.name] = svg
	}
	return out, nil
}

// ComparisonTable has a row a quantity of each comparison; names tells the probes apart.
func ComparisonTable(names []string, list []*Comparison, positions []float64) *table.Table {
	var probe, key, unit []string
	var position, measured, measuredSE, simulated, simulatedSE, sigma []float64
	for i, c := range list {
		for k := range c.Rows {
			r := &c.Rows[k]
			probe, key, unit = append(probe, names[i]), append(key, r.Key), append(unit, r.Unit)
			position = append(position, positions[i])
			measured = append(measured, r.Measured.Value)
			measuredSE = append(measuredSE, r.Measured.SE)
			simulated = append(simulated, r.Simulated.Value)
			simulatedSE = append(simulatedSE, r.Simulated.SE)
			sigma = append(sigma, r.Sigma())
		}
	}
	t := table.New("comparison", "measured and simulated quantities")
	t.AddText("probe", "name of the probe", probe)
	t.AddFloat("position_m", "m", "distance from the powered electrode", position)
	t.AddText("quantity", "quantity", key)
	t.AddEstimate("measured", "", "measured value in the unit of the row", measured, measuredSE)
	t.AddEstimate("simulated", "", "simulated value in the unit of the row", simulated, simulatedSE)
	t.AddText("unit", "unit of the values", unit)
	t.AddFloat("difference_sigma", "", "simulated less measured in joint standard errors", sigma)
	return t
}
