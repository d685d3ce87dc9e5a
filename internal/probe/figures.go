package probe

import (
	"bytes"
	"fmt"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/plotutil"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgsvg"

	"ionfall/internal/table"
)

const figureWidth, figureHeight = 22 * vg.Centimeter, 13 * vg.Centimeter

// Curve is a line or a set of points of a figure.
type Curve struct {
	Label  string
	X, Y   []float64
	Points bool
}

// Figure draws curves as SVG. On a logarithmic axis values that are not positive are left out.
func Figure(title, xLabel, yLabel string, logarithmic bool, curves ...Curve) ([]byte, error) {
	p := plot.New()
	p.Title.Text, p.X.Label.Text, p.Y.Label.Text = title, xLabel, yLabel
	p.Legend.Top, p.Legend.Left = true, !logarithmic
	p.Add(plotter.NewGrid())
	drawn := 0
	for i, c := range curves {
		var xy plotter.XYs
		for k := range c.X {
			if !(logarithmic && c.Y[k] <= 0) && !math.IsNaN(c.Y[k]) && !math.IsInf(c.Y[k], 0) {
				xy = append(xy, plotter.XY{X: c.X[k], Y: c.Y[k]})
			}
		}
		if len(xy) == 0 {
			continue
		}
		drawn++
		if err := addCurve(p, c, xy, i); err != nil {
			return nil, fmt.Errorf("drawing %s: %w", title, err)
		}
	}
	if drawn == 0 {
		return nil, fmt.Errorf("drawing %s: nothing to draw", title)
	}
	if logarithmic && p.Y.Min < p.Y.Max {
		p.Y.Scale, p.Y.Tick.Marker = plot.LogScale{}, plot.LogTicks{Prec: 1}
	}
	canvas := vgsvg.New(figureWidth, figureHeight)
	p.Draw(draw.New(canvas))
	var b bytes.Buffer
	if _, err := canvas.WriteTo(&b); err != nil {
		return nil, fmt.Errorf("drawing %s: %w", title, err)
	}
	return b.Bytes(), nil
}

func addCurve(p *plot.Plot, c Curve, xy plotter.XYs, i int) error {
	if c.Points {
		s, err := plotter.NewScatter(xy)
		if err != nil {
			return err
		}
		s.Color, s.Radius, s.Shape = plotutil.Color(i), vg.Points(1.6), draw.CircleGlyph{}
		p.Add(s)
		p.Legend.Add(c.Label, s)
		return nil
	}
	l, err := plotter.NewLine(xy)
	if err != nil {
		return err
	}
	l.Color, l.Width = plotutil.Color(i), vg.Points(1.4)
	p.Add(l)
	p.Legend.Add(c.Label, l)
	return nil
}

// Figures are the steps of a reduction as SVG, by the name of the file.
func (r *Result) Figures() (map[string][]byte, error) {
	if r.Characteristic == nil {
		return nil, nil
	}
	get := func(t *table.Table, name string) []float64 {
		c, _ := t.Column(name)
		return c.Float
	}
	volts := get(r.Characteristic, "voltage_V")
	const x = "voltage [V]"
	out := map[string][]byte{}
	for _, f := range []struct {
		name, title, x, y string
		log               bool
		curves            []Curve
	}{
		{"characteristic.svg", "characteristic", x, "current [A]", false, []Curve{
			{"measured", volts, get(r.Characteristic, "current_A"), true},
			{"fit", volts, get(r.Characteristic, "fit_A"), false},
		}},
		{"electrons.svg", "electron current", x, "current [A]", true, []Curve{
			{"measured, ions taken away", volts, get(r.Characteristic, "electron_current_A"), true},
		}},
		{"slope.svg", "first derivative", x, "dI/dV [A/V]", false, []Curve{
			{"smoothed", volts, get(r.Characteristic, "slope_AperV"), false},
		}},
		{"curvature.svg", "second derivative", x, "d2I/dV2 [A/V2]", false, []Curve{
			{"smoothed", volts, get(r.Characteristic, "curvature_AperV2"), false},
		}},
		{
			"eepf.svg", "electron energy probability function", "energy [eV]", "EEPF [eV^-3/2]", true,
			[]Curve{
				{"second derivative", get(r.EEPF, "energy_eV"), get(r.EEPF, "eepf_eVm32"), true},
				{"fit", get(r.EEPF, "energy_eV"), get(r.EEPF, "fit_eVm32"), false},
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
