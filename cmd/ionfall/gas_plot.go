package main

import (
	"bytes"
	"errors"
	"fmt"
	"image/color"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/plotutil"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgsvg"

	"ionfall/crosssections"
)

const (
	plotWidth, plotHeight = 24 * vg.Centimeter, 14 * vg.Centimeter
	legendWidth           = 8 * vg.Centimeter
	legendLine            = 16 // points a process at the most
	// plotDecades is how far below the largest cross section the picture reaches: what is smaller
	// matters little, and the rise at a threshold would squeeze all the rest.
	plotDecades = 6
	// plotSamples along the logarithmic axis show that the table is linear between its rows.
	plotSamples = 300
	// sameColors is how many curves differ by colour before the dashes change.
	sameColors = 7
)

// drawGas is an SVG of all cross sections of a gas.
func drawGas(g *crosssections.Gas) ([]byte, error) {
	p, legend, err := plotGas(g)
	if err != nil {
		return nil, err
	}
	height := max(plotHeight, vg.Length(len(processes(g)))*legendLine+2*vg.Centimeter)
	return paint(p, legend, height)
}

// plotGas is the plot, on logarithmic axes, and its legend.
func plotGas(g *crosssections.Gas) (*plot.Plot, *plot.Legend, error) {
	p := plot.New()
	p.Title.Text = fmt.Sprintf("%s, set %s", g.Name, g.Set)
	p.X.Label.Text, p.Y.Label.Text = "energy [eV]", "cross section [m2]"
	p.X.Scale, p.Y.Scale = plot.LogScale{}, plot.LogScale{}
	p.X.Tick.Marker, p.Y.Tick.Marker = plot.LogTicks{Prec: -1}, plot.LogTicks{Prec: 1}
	p.Add(plotter.NewGrid())
	legend := plot.NewLegend()
	legend.Top, legend.Left = true, true
	largest := 0.0
	list := processes(g)
	for i := range list {
		largest = max(largest, slices.Max(list[i].Table.CrossSection))
	}
	if largest == 0 {
		return nil, nil, fmt.Errorf("all cross sections of %s are 0: there is nothing to draw", g.Name)
	}
	for i := range list {
		q := &list[i]
		var shown *plotter.Line
		for _, part := range curve(&q.Table, largest*math.Pow(10, -plotDecades)) {
			line, err := plotter.NewLine(part)
			if err != nil {
				return nil, nil, fmt.Errorf("drawing %s: %w", q.Name, err)
			}
			line.Color, line.Width = plotutil.Color(i%sameColors), vg.Points(1.5)
			line.Dashes = plotutil.Dashes(i / sameColors)
			p.Add(line)
			shown = line
		}
		if shown != nil {
			legend.Add(legendText(q), shown)
		}
	}
	widen(&p.X)
	widen(&p.Y)
	return p, &legend, nil
}

// widen gives an axis a length where all values are the same: it would reach below zero else.
func widen(a *plot.Axis) {
	if a.Min == a.Max {
		a.Min, a.Max = a.Min/2, a.Max*2
	}
}

func legendText(q *crosssections.Process) string {
	if q.Projectile == crosssections.ElectronName {
		return "e: " + q.Name
	}
	return q.Name + " (" + strings.ReplaceAll(q.Frame.String(), "_", " ") + ")"
}

// curve is the parts of a table that can stand on logarithmic axes, from the smallest cross
// section on.
func curve(t *crosssections.Table, smallest float64) []plotter.XYs {
	energies := slices.Clone(t.Energy)
	energies = slices.DeleteFunc(energies, func(e float64) bool { return e <= 0 })
	if len(energies) == 0 {
		return nil
	}
	first, last := energies[0], t.Max()
	for i := range plotSamples {
		part := float64(i) / plotSamples
		energies = append(energies, first*math.Pow(last/first, part))
	}
	slices.Sort(energies)
	var parts []plotter.XYs
	open := false
	for _, e := range slices.Compact(energies) {
		q := t.At(e)
		if q < smallest {
			open = false
			continue
		}
		if !open {
			parts, open = append(parts, nil), true
		}
		parts[len(parts)-1] = append(parts[len(parts)-1], plotter.XY{X: e, Y: q})
	}
	return parts
}

// compose puts the legend beside the plot, where it hides nothing.
func compose(whole draw.Canvas, p *plot.Plot, legend *plot.Legend) {
	whole.SetColor(color.White)
	whole.Fill(whole.Rectangle.Path())
	p.Draw(draw.Crop(whole, 0, -legendWidth, 0, 0))
	legend.Draw(draw.Crop(whole, plotWidth-legendWidth+vg.Points(6), 0, 0, -vg.Points(24)))
}

// paint is the plot with its legend as SVG.
func paint(p *plot.Plot, legend *plot.Legend, height vg.Length) ([]byte, error) {
	canvas := vgsvg.New(plotWidth, height)
	compose(draw.New(canvas), p, legend)
	var b bytes.Buffer
	if _, err := canvas.WriteTo(&b); err != nil {
		return nil, errors.Join(errors.New("drawing the cross sections"), err)
	}
	return b.Bytes(), nil
}
