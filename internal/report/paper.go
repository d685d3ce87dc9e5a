package report

import (
	"bytes"
	"fmt"
	"image/color"
	"io"
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgpdf"
	"gonum.org/v1/plot/vg/vgsvg"
)

// Paper is how a figure is drawn for a journal.
type Paper struct {
	Format string  // svg, pdf or png
	Width  float64 // [mm]
	LogY   *bool   // instead of the figure's own scale
}

const (
	// ColumnWidth is that of a column in many journals [mm].
	ColumnWidth = 85.0
	paperAspect = 0.74
	paperDPI    = 600
	paperFont   = 8 // points
	legendLine  = vg.Length(10)
)

// canvasWriter is a canvas that can be written as a file.
type canvasWriter interface {
	vg.CanvasSizer
	io.WriterTo
}

func (o Paper) canvas(width, height vg.Length) (canvasWriter, error) {
	switch o.Format {
	case "svg":
		return vgsvg.New(width, height), nil
	case "pdf":
		c := vgpdf.New(width, height)
		c.EmbedFonts(true)
		return c, nil
	case "png":
		return vgimg.PngCanvas{Canvas: vgimg.NewWith(vgimg.UseWH(width, height),
			vgimg.UseDPI(paperDPI))}, nil
	}
	return nil, fmt.Errorf("format %q, want svg, pdf or png", o.Format)
}

// Draw draws a figure for a paper.
func (f *Figure) Draw(o Paper) ([]byte, error) {
	width := vg.Length(o.Width) * vg.Millimeter
	height := width * paperAspect
	legend := f.paperLegend()
	height += legendLine * vg.Length(len(legend))
	c, err := o.canvas(width, height)
	if err != nil {
		return nil, err
	}
	whole := draw.New(c)
	whole.SetColor(color.White)
	whole.Fill(whole.Rectangle.Path())
	area := draw.Crop(whole, 2, -6, 2, -legendLine*vg.Length(len(legend))-4)
	fig := *f
	if o.LogY != nil {
		fig.Y.Log = *o.LogY
	}
	inner, err := fig.paperPlot(area)
	if err != nil {
		return nil, fmt.Errorf("drawing %s: %w", f.ID, err)
	}
	for i, l := range legend {
		l.draw(whole, whole.Max.Y-legendLine*(vg.Length(i)+0.6)-2)
	}
	fig.paperStamp(inner)
	var b bytes.Buffer
	if _, err := c.WriteTo(&b); err != nil {
		return nil, fmt.Errorf("drawing %s: %w", f.ID, err)
	}
	if o.Format == "svg" {
		// Pictures of maps are to fill their place whatever its shape.
		return bytes.ReplaceAll(b.Bytes(), []byte("<image "),
			[]byte(`<image preserveAspectRatio="none" `)), nil
	}
	return b.Bytes(), nil
}

func paperText(size vg.Length) text.Style {
	return text.Style{
		Color: color.Black, Handler: plot.DefaultTextHandler,
		Font: font.Font{Typeface: "Liberation", Variant: "Sans", Size: size},
	}
}

// newPlot is an empty plot in the style of the paper.
func newPlot(x, y Axis) *plot.Plot {
	p := plot.New()
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		a.Label.TextStyle.Font = paperText(paperFont).Font
		a.Tick.Label.Font = paperText(paperFont - 1).Font
		a.LineStyle.Width, a.Tick.LineStyle.Width = 0.6, 0.6
		a.Padding = 2
	}
	setScale(&p.X, x)
	setScale(&p.Y, y)
	return p
}

func setScale(a *plot.Axis, of Axis) {
	a.Label.Text = paperTitle(of)
	a.Tick.Marker = ticker{of.Log, of}
	if of.Log {
		a.Scale = plot.LogScale{}
	}
}

// paperTitle holds no sign that fonts may lack.
func paperTitle(a Axis) string {
	if a.Unit == "" {
		return a.Label
	}
	return a.Label + " [" + strings.NewReplacer("m2", "m²", "m3", "m³").Replace(a.Unit) + "]"
}

// ticker marks round values.
type ticker struct {
	log bool
	of  Axis
}

// Ticks implements plot.Ticker. Large numbers are written with their power of ten.
func (t ticker) Ticks(low, high float64) []plot.Tick {
	var list []plot.Tick
	if t.log {
		for _, k := range logTicks(low, high, 6) {
			list = append(list, plot.Tick{Value: k.at, Label: fmt.Sprintf("1e%d",
				int(math.Round(math.Log10(k.at))))})
		}
		return list
	}
	ticks, power := linearTicks(low, high, 5)
	for _, k := range ticks {
		label := strings.Replace(k.label, "\u2212", "-", 1)
		if power != 0 && k.at != 0 {
			label = strconv.FormatFloat(k.at, 'g', 3, 64)
			label = strings.Replace(label, "e+", "e", 1)
		}
		list = append(list, plot.Tick{Value: k.at, Label: label})
	}
	return list
}

// paperStamp marks what is not to be used, across the axes.
func (f *Figure) paperStamp(c draw.Canvas) {
	stamp := f.Stamp()
	if stamp == "" {
		return
	}
	red := color.NRGBA{R: 161, G: 22, B: 22, A: 255}
	size := c.Max.X - c.Min.X
	st := paperText(vg.Length(math.Min(20, 1.7*size.Points()/float64(len(stamp)))))
	st.Color, st.Rotation = red, math.Pi/12
	st.XAlign, st.YAlign = draw.XCenter, draw.YCenter
	c.FillText(st, vg.Point{X: (c.Min.X + c.Max.X) / 2, Y: (c.Min.Y + c.Max.Y) / 2}, stamp)
	c.StrokeLines(draw.LineStyle{Color: red, Width: 1.5, Dashes: []vg.Length{5, 2}},
		[]vg.Point{
			c.Min, {X: c.Max.X, Y: c.Min.Y}, c.Max, {X: c.Min.X, Y: c.Max.Y}, c.Min,
		})
}

// paperKey is a line of the legend.
type paperKey struct {
	name string
	line draw.LineStyle
	dots bool
}

func (f *Figure) paperLegend() []paperKey {
	var list []paperKey
	if f.Map != nil {
		return nil
	}
	for _, k := range f.keys() {
		s := &f.Series[k.series]
		list = append(list, paperKey{k.name, lineStyle(s, k.style), s.Dots})
	}
	return list
}

func (k paperKey) draw(c draw.Canvas, y vg.Length) {
	const left, length = vg.Length(30), vg.Length(24)
	if k.dots {
		c.DrawGlyph(draw.GlyphStyle{Color: k.line.Color, Radius: 1.8, Shape: draw.CircleGlyph{}},
			vg.Point{X: left + length/2, Y: y})
	} else {
		c.StrokeLine2(k.line, left, y, left+length, y)
	}
	st := paperText(paperFont - 1)
	st.YAlign = draw.YCenter
	c.FillText(st, vg.Point{X: left + length + 5, Y: y}, k.name)
}

func lineStyle(s *Series, st style) draw.LineStyle {
	light, _ := curveColors()
	l := draw.LineStyle{Color: parseColor(light[st.color%len(light)]), Width: 1}
	pattern := dashes()[st.dash%len(dashes())]
	if s.Law {
		l.Width, pattern = 0.6, "1 2"
	}
	for word := range strings.FieldsSeq(pattern) {
		v, err := strconv.ParseFloat(word, 64)
		if err != nil {
			panic("report: a pattern of dashes is no number: " + word)
		}
		l.Dashes = append(l.Dashes, vg.Length(v)*0.7)
	}
	return l
}

func parseColor(hex string) color.NRGBA {
	v, err := strconv.ParseUint(strings.TrimPrefix(hex, "#"), 16, 32)
	if err != nil {
		panic("report: a colour is no number: " + hex)
	}
	return color.NRGBA{R: uint8(v >> 16), G: uint8(v >> 8), B: uint8(v), A: 255}
}

// xys are the corners of a curve: two for each bin of a histogram.
func (s *Series) xys(log bool, of func(i int) float64) plotter.XYs {
	var list plotter.XYs
	for i := range s.X {
		y := of(i)
		if math.IsNaN(y) || math.IsInf(y, 0) || log && y <= 0 {
			continue
		}
		if s.Steps && len(s.Width) > 0 {
			half := s.Width[i] / 2
			list = append(list, plotter.XY{X: s.X[i] - half, Y: y},
				plotter.XY{X: s.X[i] + half, Y: y})
			continue
		}
		list = append(list, plotter.XY{X: s.X[i], Y: y})
	}
	return list
}
