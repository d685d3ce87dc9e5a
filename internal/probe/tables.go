package probe

import (
	"math"

	"ionfall/internal/phys"
	"ionfall/internal/table"
)

// tables are what the figures show: the characteristic and the EEPF.
func (r *reduction) tables(_ *smoothed) {
	c, d := r.result.fit, r.cleaned
	grid, values := uniform(d.voltage, d.current)
	spacing := grid[1] - grid[0]
	s, err := newSmoothing(windowUsual*c.shape.coldest, spacing, len(grid))
	if err != nil {
		return // a reduction that came so far has a window
	}
	first := s.filter.Apply(values, 1, spacing)
	second := s.filter.Apply(values, 2, spacing)
	fit, electrons := make([]float64, len(grid)), make([]float64, len(grid))
	sigma := make([]float64, len(grid))
	var energy, eepf, eepfSE, model []float64
	scale := 4 / (r.setup.Area() * phys.ElementaryCharge * electronScale() * c.density)
	gain := s.filter.Gain(2) / (spacing * spacing)
	for k, v := range grid {
		fit[k], electrons[k] = c.at(v), values[k]+c.ions(v)
		sigma[k] = math.Hypot(d.floor, d.relative*values[k])
	}
	for k := len(grid) - 1; k >= 0; k-- {
		v := grid[k]
		u := c.potential - v
		if u < 0 || u > 12*c.shape.temperature {
			continue
		}
		energy = append(energy, u)
		eepf = append(eepf, scale*(second[k]+ionCurvature(c, v, s.width)))
		eepfSE = append(eepfSE, scale*gain*r.scale*sigma[k])
		h := c.shape.coldest / 40
		curvature := c.shape.part(u+h) - 2*c.shape.part(u) + c.shape.part(math.Max(u-h, 0))
		if u < h {
			curvature = c.shape.part(u+2*h) - 2*c.shape.part(u+h) + c.shape.part(u)
		}
		model = append(model, scale*c.electrons*curvature/(h*h))
	}
	t := table.New("characteristic", "the characteristic of the probe, all sweeps together")
	t.AddFloat("voltage_V", "V", "voltage of the tip", grid)
	t.AddEstimate("current_A", "A", "current, electron current positive", values, sigma)
	t.AddFloat("fit_A", "A", "fitted current", fit)
	t.AddFloat("electron_current_A", "A", "current without that of ions", electrons)
	t.AddFloat("slope_AperV", "", "first derivative by smoothing, A/V", first)
	t.AddFloat("curvature_AperV2", "", "second derivative by smoothing, A/V2", second)
	r.result.Characteristic = t
	e := table.New("probe_eepf", "electron energy probability function by the second derivative")
	e.AddFloat("energy_eV", "eV", "energy below the plasma potential", energy)
	e.AddEstimate("eepf_eVm32", "eV^-3/2", "the integral of sqrt(E) times it is 1", eepf, eepfSE)
	e.AddFloat("fit_eVm32", "eV^-3/2", "of the fitted form", model)
	r.result.EEPF = e
	r.note("derivatives: polynomials of order %d over a window of %.2g V; broadening corrected by "+
		"what the window does to the fit", smoothOrder, s.width)
}

// Tables are those that a reduction leaves: scalars, the characteristic and the EEPF.
func (r *Result) Tables() []*table.Table {
	var path, unit, reason []string
	var value, se []float64
	add := func(key string, q Quantity) {
		path, unit, reason = append(path, key), append(unit, q.Unit), append(reason, q.Reason)
		value, se = append(value, q.Value), append(se, q.SE)
	}
	for _, q := range r.Quantities {
		add(q.Key, q.Quantity)
	}
	for _, m := range r.Methods {
		add(m.Key, m.Quantity)
	}
	t := table.New("probe", "what the sweeps give")
	t.AddText("path", "quantity", path)
	t.AddFloat("value", "", "value in the unit of the row", value)
	t.AddFloat("se", "", "standard error", se)
	t.AddText("unit", "unit of value and se", unit)
	t.AddText("reason", "why there is no value", reason)
	list := []*table.Table{t}
	if r.Characteristic != nil {
		list = append(list, r.Characteristic, r.EEPF)
	}
	return list
}

// WidenForArea adds the relative error of the area of the tip to the densities.
func (r *Result) WidenForArea(relative float64) {
	if !(relative > 0) {
		return
	}
	for i := range r.Quantities {
		q := &r.Quantities[i]
		if q.Key == KeyElectronDensity || q.Key == KeyIonDensity {
			q.SE = math.Hypot(q.SE, relative*q.Value)
		}
	}
}
