package report

import (
	"html"
	"math"
)

const (
	barRow    = 30.0
	barLabels = 230.0
)

// drawBars draws amounts as bars from zero, with their errors as lines.
func (d *drawing) drawBars() {
	f := d.f
	d.top = 8
	d.height = d.top + barRow*float64(len(f.Bars)) + bottomSpace
	low, high := 0.0, 0.0
	for _, b := range f.Bars {
		if !math.IsNaN(b.Value) {
			low, high = math.Min(low, b.Value-b.SE), math.Max(high, b.Value+b.SE)
		}
	}
	if low == high {
		high = 1
	}
	d.x = scale{low, high + 0.02*(high-low), barLabels, d.right, false}
	d.y = scale{0, 1, d.height - bottomSpace, d.top, false}
	ticks, power := linearTicks(d.x.low, d.x.high, 6)
	for _, t := range ticks {
		d.add(`<path class="gr" d="M%.1f %.1fV%.1f"/>`, d.x.at(t.at), d.top, d.y.from)
		d.add(`<text class="nx" x="%.1f" y="%.1f">%s</text>`, d.x.at(t.at), d.y.from+16, t.label)
	}
	d.add(`<text class="nx" x="%.1f" y="%.1f">%s</text>`, (barLabels+d.right)/2, d.y.from+36,
		html.EscapeString(axisTitle(f.Y, power)))
	light, _ := curveColors()
	for i, b := range f.Bars {
		y := d.top + barRow*float64(i)
		d.add(`<text class="ny" x="%.1f" y="%.1f">%s</text>`, barLabels-6, y+barRow/2+4,
			html.EscapeString(f.Name(b.Label, b.Run)))
		if math.IsNaN(b.Value) {
			continue
		}
		from, to := d.x.at(math.Min(0, b.Value)), d.x.at(math.Max(0, b.Value))
		class := 0
		if len(f.Runs) > 1 {
			class = b.Run
		}
		d.add(`<rect class="f%d" x="%.1f" y="%.1f" width="%.1f" height="%.1f" opacity="0.75"/>`,
			class%len(light), from, y+6, to-from, barRow-12)
		if b.SE > 0 {
			d.add(`<path class="er" d="M%.1f %.1fH%.1fm0 -5v10M%.1f %.1fv10"/>`,
				d.x.at(b.Value-b.SE), y+barRow/2, d.x.at(b.Value+b.SE),
				d.x.at(b.Value-b.SE), y+barRow/2-5)
		}
	}
	d.add(`<path class="ax" d="M%.1f %.1fV%.1f"/>`, d.x.at(0), d.top, d.y.from)
}
