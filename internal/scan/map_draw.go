package scan

import (
	"bytes"
	"fmt"
	"image/color"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/palette/moreland"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgsvg"

	"ionfall/internal/progress"
	"ionfall/internal/report"
	"ionfall/internal/table"
)

const (
	mapWidth, mapHeight = 20 * vg.Centimeter, 15 * vg.Centimeter
	// mapColors of the scale, and contours between its ends.
	mapColors, mapContours = 64, 6
	// mostLabels is how many values with errors find room on a map.
	mostLabels = 100
)

// The marks of points, as the legend tells.
func marks() map[string]draw.GlyphStyle {
	style := func(shape draw.GlyphDrawer, c color.Color) draw.GlyphStyle {
		return draw.GlyphStyle{Color: c, Radius: vg.Points(4), Shape: shape}
	}
	red := color.RGBA{R: 200, A: 255}
	return map[string]draw.GlyphStyle{
		"ok":               style(draw.CircleGlyph{}, color.Black),
		"warn":             style(draw.TriangleGlyph{}, color.RGBA{R: 160, G: 90, A: 255}),
		"not trusted":      style(draw.CrossGlyph{}, red),
		"not computed":     style(draw.SquareGlyph{}, red),
		"not computed yet": style(draw.SquareGlyph{}, color.Gray{Y: 150}),
	}
}

// mark names how a point is drawn.
func (p MapPoint) mark() string {
	switch {
	case p.Status == Failed:
		return "not computed"
	case p.Status != Done:
		return "not computed yet"
	case !p.Sound():
		return "not trusted"
	}
	return p.Verdict
}

// SVG draws the map. Only points that are sound are coloured, joined by contours or lines.
func (m *Map) SVG() ([]byte, error) {
	p := plot.New()
	p.Title.Text = m.title()
	if len(m.Fixed) > 0 {
		p.Title.Text += "\n" + strings.Join(m.Fixed, ", ")
	}
	p.X.Label.Text = m.axisTitle(0)
	var err error
	if len(m.Axes) == 2 {
		p.Y.Label.Text = m.axisTitle(1)
		err = m.drawPlane(p)
	} else {
		p.Y.Label.Text = m.title()
		err = m.drawLine(p)
	}
	if err == nil {
		err = m.drawMarks(p)
	}
	if err != nil {
		return nil, fmt.Errorf("drawing %s: %w", m.Of, err)
	}
	// Room for marks and labels at the sides, and for the legend above.
	width, height := p.X.Max-p.X.Min, p.Y.Max-p.Y.Min
	p.X.Min, p.X.Max = p.X.Min-0.04*width, p.X.Max+0.1*width
	p.Y.Min, p.Y.Max = p.Y.Min-0.04*height, p.Y.Max+0.2*height
	canvas := vgsvg.New(mapWidth, mapHeight)
	p.Draw(draw.New(canvas))
	var b bytes.Buffer
	_, err = canvas.WriteTo(&b)
	return b.Bytes(), err
}

// title is the result with its unit.
func (m *Map) title() string {
	return report.Axis{Label: table.ResultName(m.Of), Unit: m.Unit}.Title()
}

func (m *Map) axisTitle(k int) string {
	return report.Axis{Label: m.Short[k], Unit: m.Axes[k].Unit}.Title()
}

// drawMarks puts a mark at every point, sound or not, and says what the marks mean.
func (m *Map) drawMarks(p *plot.Plot) error {
	groups := map[string]plotter.XYs{}
	lowest := math.Inf(1)
	for _, point := range m.Points {
		if !math.IsNaN(point.Value) {
			lowest = math.Min(lowest, point.Value)
		}
	}
	for _, point := range m.Points {
		at := plotter.XY{X: point.X, Y: point.Y}
		if len(m.Axes) == 1 {
			at.Y = point.Value
			if math.IsNaN(at.Y) { // a point without a value stands at the bottom
				at.Y = lowest
			}
			if math.IsInf(at.Y, 0) {
				at.Y = 0
			}
		}
		groups[point.mark()] = append(groups[point.mark()], at)
	}
	for _, name := range []string{"ok", "warn", "not trusted", "not computed", "not computed yet"} {
		if len(groups[name]) == 0 {
			continue
		}
		s, err := plotter.NewScatter(groups[name])
		if err != nil {
			return err
		}
		s.GlyphStyle = marks()[name]
		p.Add(s)
		p.Legend.Add(name, s)
	}
	p.Legend.Top, p.Legend.XOffs = true, -vg.Centimeter
	return nil
}

// drawLine draws sound values with their error bars, joined where no point between them is
// missing.
func (m *Map) drawLine(p *plot.Plot) error {
	points := slices.Clone(m.Points)
	slices.SortStableFunc(points, func(a, b MapPoint) int {
		switch {
		case a.X < b.X:
			return -1
		case a.X > b.X:
			return 1
		}
		return 0
	})
	var bars errorBars
	var part plotter.XYs
	flush := func() error {
		if len(part) > 1 && !m.Scattered {
			line, err := plotter.NewLine(part)
			if err != nil {
				return err
			}
			p.Add(line)
		}
		part = nil
		return nil
	}
	for _, point := range points {
		if !point.Sound() {
			if err := flush(); err != nil {
				return err
			}
			continue
		}
		at := plotter.XY{X: point.X, Y: point.Value}
		part, bars.XYs = append(part, at), append(bars.XYs, at)
		e := point.StdErr
		if math.IsNaN(e) {
			e = 0
		}
		bars.YErrors = append(bars.YErrors, struct{ Low, High float64 }{-e, e})
	}
	if err := flush(); err != nil || len(bars.XYs) == 0 {
		return err
	}
	b, err := plotter.NewYErrorBars(bars)
	if err == nil {
		p.Add(b)
	}
	return err
}

type errorBars struct {
	plotter.XYs
	plotter.YErrors
}

// drawPlane colours the cells of a grid, draws contours between sound points, and writes the values
// with their errors where there is room.
func (m *Map) drawPlane(p *plot.Plot) error {
	r := m.raster()
	low, high := math.Inf(1), math.Inf(-1)
	for _, point := range m.Points {
		if point.Sound() {
			low, high = math.Min(low, point.Value), math.Max(high, point.Value)
		}
	}
	if r != nil && high > low {
		colors := moreland.SmoothBlueRed()
		colors.SetMin(low)
		colors.SetMax(high)
		h := plotter.NewHeatMap(r, colors.Palette(mapColors))
		h.Min, h.Max = low, high
		h.NaN = color.White
		p.Add(h)
		for k := range mapContours {
			level := low + (high-low)*float64(k+1)/(mapContours+1)
			for _, s := range r.contour(level) {
				line, err := plotter.NewLine(plotter.XYs{{X: s.X0, Y: s.Y0}, {X: s.X1, Y: s.Y1}})
				if err != nil {
					return err
				}
				line.Color = color.Gray{Y: 60}
				p.Add(line)
			}
		}
	}
	return m.label(p)
}

// label writes the sound values with their errors beside the marks.
func (m *Map) label(p *plot.Plot) error {
	var at plotter.XYLabels
	for _, point := range m.Points {
		if point.Sound() {
			at.XYs = append(at.XYs, plotter.XY{X: point.X, Y: point.Y})
			at.Labels = append(at.Labels, progress.WithError(point.Value, point.StdErr))
		}
	}
	if len(at.XYs) == 0 || len(at.XYs) > mostLabels {
		return nil
	}
	labels, err := plotter.NewLabels(at)
	if err != nil {
		return err
	}
	labels.Offset = vg.Point{X: vg.Points(5), Y: vg.Points(4)}
	for i := range labels.TextStyle {
		labels.TextStyle[i].Font.Size = vg.Points(8)
	}
	p.Add(labels)
	return nil
}

// Dims returns the number of columns and rows.
func (r *raster) Dims() (columns, rows int) { return len(r.x), len(r.y) }

// Z returns the value of a cell.
func (r *raster) Z(column, row int) float64 { return r.z[column][row] }

// X returns where a column is.
func (r *raster) X(column int) float64 { return r.x[column] }

// Y returns where a row is.
func (r *raster) Y(row int) float64 { return r.y[row] }
