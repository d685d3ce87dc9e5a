package report

import (
	"fmt"
	"html"
	"math"
	"strings"
)

// Sizes of a drawing in the page, in its own units, which are pixels on most screens.
const (
	drawWidth   = 640.0
	drawHeight  = 300.0
	leftEdge    = 74.0
	rightEdge   = drawWidth - 14
	legendRow   = 18.0
	bottomSpace = 46.0
	letterWidth = 6.6 // about, of the page's font at 12 units
)

// drawing collects the elements of an SVG. Colours are classes of the page, so that they follow
// light and dark.
type drawing struct {
	strings.Builder
	f          *Figure
	x, y       scale
	top, right float64
	height     float64
}

func (d *drawing) add(format string, args ...any) {
	d.WriteString(fmt.Sprintf(format+"\n", args...))
}

// SVG draws the figure for the page.
func (f *Figure) SVG() (string, error) {
	d := &drawing{f: f, right: rightEdge, height: drawHeight}
	var err error
	switch {
	case f.Map != nil:
		err = d.drawMap()
	case f.Bars != nil:
		d.drawBars()
	default:
		d.drawCurves()
	}
	if err != nil {
		return "", err
	}
	d.stamp()
	return fmt.Sprintf(`<svg viewBox="0 0 %g %g" role="img" aria-labelledby="alt-%s" `+
		`class="figure">`+"\n"+`<title id="alt-%s">%s</title>`+"\n%s</svg>",
		drawWidth, d.height, html.EscapeString(f.ID), html.EscapeString(f.ID),
		html.EscapeString(f.Alt), d.String()), nil
}

// eachValue visits what the axes must hold.
func (f *Figure) eachX(visit func(float64)) {
	for _, s := range f.Series {
		for i, v := range s.X {
			visit(v)
			if len(s.Width) > 0 && i == 0 && !f.X.Log {
				visit(math.Max(0, v-s.Width[i]/2))
			}
		}
	}
}

func (f *Figure) eachY(visit func(float64)) {
	for _, s := range f.Series {
		for i, v := range s.Y {
			visit(v)
			if len(s.SE) > 0 && !f.Y.Log && !math.IsNaN(s.SE[i]) {
				visit(v + s.SE[i])
				visit(v - s.SE[i])
			}
		}
	}
}

func (d *drawing) drawCurves() {
	f := d.f
	rows := d.legend()
	d.top = 8 + legendRow*float64(rows)
	d.height = drawHeight + d.top - 8
	lowX, highX := rangeOf(f.X, f.eachX, false)
	lowY, highY := rangeOf(f.Y, f.eachY, true)
	d.x = scale{lowX, highX, leftEdge, d.right, f.X.Log}
	d.y = scale{lowY, highY, d.height - bottomSpace, d.top, f.Y.Log}
	d.bands()
	d.axes(f.X, f.Y)
	for i, st := range f.styles() {
		d.curve(&f.Series[i], st)
	}
}

// legend writes the names of the curves and returns the number of rows.
func (d *drawing) legend() int {
	x, row := leftEdge, 0
	for _, k := range d.f.keys() {
		s, st := &d.f.Series[k.series], k.style
		name := prettyUnit(k.name)
		width := 34 + letterWidth*float64(len([]rune(name))) + 14
		if x > leftEdge && x+width > d.right {
			x, row = leftEdge, row+1
		}
		y := 6 + legendRow*(float64(row)+0.5)
		switch {
		case s.Cross:
			d.add(`<path class="cross" d="M%.1f %.1fl9 9m0 -9l-9 9"/>`, x+9, y-4.5)
		case s.Dots:
			light, _ := curveColors()
			d.add(`<circle class="f%d" cx="%.1f" cy="%.1f" r="3.5"/>`, st.color%len(light), x+13, y)
		default:
			d.add(`<path class="%s" d="M%.0f %.1fh26"/>`, curveClass(s, st), x, y)
		}
		d.add(`<text class="lb" x="%.0f" y="%.1f">%s</text>`, x+32, y+4, html.EscapeString(name))
		x += width
	}
	return row + 1
}

func curveClass(s *Series, st style) string {
	light, _ := curveColors()
	class := fmt.Sprintf("ln c%d", st.color%len(light))
	if s.Law {
		return class + " law"
	}
	return class + fmt.Sprintf(" d%d", st.dash%len(dashes()))
}

// bands shades parts of the x axis.
func (d *drawing) bands() {
	for _, b := range d.f.Bands {
		from, to := d.x.at(math.Max(b.From, d.x.low)), d.x.at(math.Min(b.To, d.x.high))
		d.add(`<rect class="band" x="%.1f" y="%.1f" width="%.1f" height="%.1f"/>`,
			from, d.top, math.Max(0, to-from), d.y.from-d.top)
		d.add(`<text class="note" x="%.1f" y="%.1f">%s</text>`, from+5, d.top+14,
			html.EscapeString(b.Label))
	}
}

// axes draws grid, numbers and titles.
func (d *drawing) axes(x, y Axis) {
	ticksX, powerX := ticksOf(d.x, 8)
	for _, t := range ticksX {
		at := d.x.at(t.at)
		d.add(`<path class="gr" d="M%.1f %.1fV%.1f"/>`, at, d.top, d.y.from)
		d.add(`<text class="nx" x="%.1f" y="%.1f">%s</text>`, at, d.y.from+16, t.label)
	}
	ticksY, powerY := ticksOf(d.y, 5)
	for _, t := range ticksY {
		at := d.y.at(t.at)
		d.add(`<path class="gr" d="M%.1f %.1fH%.1f"/>`, leftEdge, at, d.right)
		d.add(`<text class="ny" x="%.1f" y="%.1f">%s</text>`, leftEdge-6, at+4, t.label)
	}
	d.add(`<rect class="fr" x="%.1f" y="%.1f" width="%.1f" height="%.1f"/>`, leftEdge, d.top,
		d.right-leftEdge, d.y.from-d.top)
	d.add(`<text class="nx" x="%.1f" y="%.1f">%s</text>`, (leftEdge+d.right)/2, d.y.from+36,
		html.EscapeString(axisTitle(x, powerX)))
	d.add(`<text class="nx" transform="translate(14 %.1f) rotate(-90)">%s</text>`,
		(d.top+d.y.from)/2, html.EscapeString(axisTitle(y, powerY)))
}

func ticksOf(s scale, n int) ([]tick, int) {
	if s.log {
		return logTicks(s.low, s.high, n), 0
	}
	return linearTicks(s.low, s.high, n)
}

// stamp says across the axes that a run is not to be used.
func (d *drawing) stamp() {
	text := d.f.Stamp()
	if text == "" {
		return
	}
	bottom := d.y.from
	middleX, middleY := (leftEdge+d.right)/2, (d.top+bottom)/2
	d.add(`<rect class="bad" x="%.1f" y="%.1f" width="%.1f" height="%.1f"/>`, leftEdge, d.top,
		d.right-leftEdge, bottom-d.top)
	size := math.Min(34, 1.6*(d.right-leftEdge)/float64(len([]rune(text))))
	d.add(`<text class="stamp" font-size="%.0f" transform="translate(%.1f %.1f) rotate(-14)">`+
		`%s</text>`, size, middleX, middleY, html.EscapeString(text))
}
