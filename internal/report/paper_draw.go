package report

import (
	"image"
	"image/color"
	"math"
	"slices"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// paperPlot draws the figure into the area and returns the part inside of the axes.
func (f *Figure) paperPlot(area draw.Canvas) (draw.Canvas, error) {
	switch {
	case f.Map != nil:
		return f.paperMap(area)
	case f.Bars != nil:
		return f.paperBars(area)
	}
	p := newPlot(f.X, f.Y)
	lowX, highX := rangeOf(f.X, f.eachX, false)
	lowY, highY := rangeOf(f.Y, f.eachY, true)
	for _, b := range f.Bands {
		band, err := plotter.NewPolygon(plotter.XYs{
			{X: math.Max(b.From, lowX), Y: lowY},
			{X: b.To, Y: lowY},
			{X: b.To, Y: highY},
			{X: math.Max(b.From, lowX), Y: highY},
		})
		if err != nil {
			return area, err
		}
		band.Color, band.LineStyle.Width = color.NRGBA{R: 90, G: 90, B: 90, A: 40}, 0
		p.Add(band)
	}
	for i, st := range f.styles() {
		if err := f.Series[i].addTo(p, st, f.Y.Log, lowY); err != nil {
			return area, err
		}
	}
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = lowX, highX, lowY, highY
	p.Draw(area)
	return p.DataCanvas(area), nil
}

// addTo adds a curve with the band of its error, or points with bars.
func (s *Series) addTo(p *plot.Plot, st style, log bool, floor float64) error {
	look := lineStyle(s, st)
	line := s.xys(log, func(i int) float64 { return s.Y[i] })
	if len(line) == 0 {
		return nil
	}
	if s.Dots {
		return s.addDots(p, look.Color, log)
	}
	if len(s.SE) > 0 {
		up := s.xys(log, func(i int) float64 { return s.edge(i, log, s.SE[i], floor) })
		down := s.xys(log, func(i int) float64 { return s.edge(i, log, -s.SE[i], floor) })
		slices.Reverse(down)
		if outline := append(up, down...); len(outline) > 2 {
			band, err := plotter.NewPolygon(outline)
			if err != nil {
				return err
			}
			c, ok := look.Color.(color.NRGBA)
			if ok {
				c.A = 70
			}
			band.Color, band.LineStyle.Width = c, 0
			p.Add(band)
		}
	}
	l, err := plotter.NewLine(line)
	if err != nil {
		return err
	}
	l.LineStyle = look
	p.Add(l)
	return nil
}

// edge is an end of the error band; a logarithmic axis ends it at its floor.
func (s *Series) edge(i int, log bool, se, floor float64) float64 {
	if math.IsNaN(se) || log && !(s.Y[i] > 0) {
		return s.Y[i]
	}
	if log {
		return math.Max(s.Y[i]+se, floor)
	}
	return s.Y[i] + se
}

// pointErrors are points with their errors, for gonum/plot.
type pointErrors struct {
	plotter.XYs
	plotter.YErrors
}

func (s *Series) addDots(p *plot.Plot, c color.Color, log bool) error {
	var data pointErrors
	for i := range s.X {
		if math.IsNaN(s.Y[i]) || log && s.Y[i] <= 0 {
			continue
		}
		data.XYs = append(data.XYs, plotter.XY{X: s.X[i], Y: s.Y[i]})
		e := struct{ Low, High float64 }{}
		if len(s.SE) > 0 && !math.IsNaN(s.SE[i]) {
			e.Low, e.High = s.SE[i], s.SE[i]
			if log {
				e.Low = math.Min(e.Low, 0.99*s.Y[i])
			}
		}
		data.YErrors = append(data.YErrors, e)
	}
	dots, err := plotter.NewScatter(data.XYs)
	if err != nil {
		return err
	}
	dots.GlyphStyle = draw.GlyphStyle{Color: c, Radius: 1.8, Shape: draw.CircleGlyph{}}
	bars, err := plotter.NewYErrorBars(data)
	if err != nil {
		return err
	}
	bars.LineStyle.Color, bars.LineStyle.Width, bars.CapWidth = c, 0.6, 3
	p.Add(bars, dots)
	return nil
}

// paperMap draws a map and the bar of its colours.
func (f *Figure) paperMap(area draw.Canvas) (draw.Canvas, error) {
	m := f.Map
	barSpace := (area.Max.X - area.Min.X) * 0.2
	p := newPlot(f.X, f.Y)
	lowX, highX := m.XEdges[0], m.XEdges[len(m.XEdges)-1]
	lowY, highY := m.YEdges[0], m.YEdges[len(m.YEdges)-1]
	p.Add(plotter.NewImage(m.paint(900, 600), lowX, lowY, highX, highY))
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = lowX, highX, lowY, highY
	left := draw.Crop(area, 0, -barSpace-4, 0, 0)
	p.Draw(left)
	inner := p.DataCanvas(left)

	low, high := m.limits()
	bar := newPlot(Axis{}, m.Value)
	gradient := image.NewNRGBA(image.Rect(0, 0, 1, mapColors))
	for i := range mapColors {
		gradient.Set(0, mapColors-1-i, mapColor(float64(i)/(mapColors-1)))
	}
	bar.Add(plotter.NewImage(gradient, 0, low, 1, high))
	bar.X.Min, bar.X.Max, bar.Y.Min, bar.Y.Max = 0, 1, low, high
	bar.HideX()
	right := draw.Crop(area, area.Max.X-area.Min.X-barSpace, 0, inner.Min.Y-area.Min.Y-3, 0)
	bar.Draw(right)
	return inner, nil
}

// paperBars draws amounts with their errors.
func (f *Figure) paperBars(area draw.Canvas) (draw.Canvas, error) {
	p := newPlot(f.Y, Axis{})
	n := len(f.Bars)
	values, names := make(plotter.Values, n), make([]string, n)
	errs := plotter.XErrors{}
	places := plotter.XYs{}
	for i := range n {
		b := f.Bars[n-1-i] // the first on top
		names[i] = f.Name(b.Label, b.Run)
		if math.IsNaN(b.Value) {
			continue
		}
		values[i] = b.Value
		if b.SE > 0 {
			places = append(places, plotter.XY{X: b.Value, Y: float64(i)})
			errs = append(errs, struct{ Low, High float64 }{b.SE, b.SE})
		}
	}
	bars, err := plotter.NewBarChart(values, vg.Points(9))
	if err != nil {
		return area, err
	}
	light, _ := curveColors()
	bars.Horizontal, bars.Color, bars.LineStyle.Width = true, parseColor(light[0]), 0
	p.Add(bars)
	if len(places) > 0 {
		whiskers, err := plotter.NewXErrorBars(struct {
			plotter.XYs
			plotter.XErrors
		}{places, errs})
		if err != nil {
			return area, err
		}
		whiskers.LineStyle.Width, whiskers.CapWidth = 0.8, 4
		p.Add(whiskers)
	}
	p.NominalY(names...)
	p.Draw(area)
	return p.DataCanvas(area), nil
}
