package report

import (
	"bytes"
	"encoding/base64"
	"fmt"
	"html"
	"image"
	"image/color"
	"image/png"
	"math"
	"sort"
)

// Size of the picture of a map, in its pixels.
const (
	pictureWidth, pictureHeight = 520, 250
	barGap, barWidth            = 14.0, 14.0
	mapColors                   = 200
)

func (d *drawing) drawMap() error {
	f, m := d.f, d.f.Map
	d.top, d.right = 10, drawWidth-92
	d.x = scale{m.XEdges[0], m.XEdges[len(m.XEdges)-1], leftEdge, d.right, false}
	d.y = scale{m.YEdges[0], m.YEdges[len(m.YEdges)-1], d.height - bottomSpace, d.top, false}
	picture, err := m.picture(pictureWidth, pictureHeight)
	if err != nil {
		return err
	}
	d.add(`<image href="data:image/png;base64,%s" x="%.1f" y="%.1f" width="%.1f" height="%.1f" `+
		`preserveAspectRatio="none"/>`, base64.StdEncoding.EncodeToString(picture), leftEdge,
		d.top, d.right-leftEdge, d.y.from-d.top)
	d.overlay()
	d.axes(f.X, f.Y)
	d.colorBar()
	return nil
}

// colorBar shows which colour is which value.
func (d *drawing) colorBar() {
	m := d.f.Map
	low, high := m.limits()
	s := scale{low, high, d.y.from, d.top, m.Value.Log}
	x := d.right + barGap
	const steps = 50
	for i := range steps {
		c := mapColor((float64(i) + 0.5) / steps)
		height := (d.y.from - d.top) / steps
		d.add(`<rect x="%.1f" y="%.2f" width="%g" height="%.2f" fill="#%02x%02x%02x"/>`, x,
			d.y.from-height*float64(i+1), barWidth, height+0.4, c.R, c.G, c.B)
	}
	ticks, power := ticksOf(s, 5)
	for _, t := range ticks {
		d.add(`<text class="nl" x="%.1f" y="%.1f">%s</text>`, x+barWidth+5, s.at(t.at)+4, t.label)
	}
	d.add(`<text class="nx" transform="translate(%.1f %.1f) rotate(-90)">%s</text>`,
		drawWidth-4, (d.top+d.y.from)/2, html.EscapeString(axisTitle(m.Value, power)))
}

// picture paints the map as PNG.
func (m *Map) picture(width, height int) ([]byte, error) {
	var b bytes.Buffer
	encoder := png.Encoder{CompressionLevel: png.BestCompression}
	if err := encoder.Encode(&b, m.paint(width, height)); err != nil {
		return nil, fmt.Errorf("painting a map: %w", err)
	}
	return b.Bytes(), nil
}

// paint gives every pixel the colour of the bin it lies in.
func (m *Map) paint(width, height int) *image.Paletted {
	palette := color.Palette{color.NRGBA{}}
	for i := range mapColors {
		palette = append(palette, mapColor(float64(i)/(mapColors-1)))
	}
	low, high := m.limits()
	s := scale{low, high, 0, mapColors - 1, m.Value.Log}
	picture := image.NewPaletted(image.Rect(0, 0, width, height), palette)
	columns, rows := pixelBins(m.XEdges, width), pixelBins(m.YEdges, height)
	nx := len(m.XEdges) - 1
	for j := range height {
		row := rows[height-1-j]
		for i := range width {
			z := m.Z[row*nx+columns[i]]
			if math.IsNaN(z) || m.Value.Log && z <= 0 {
				continue
			}
			at := math.Round(math.Min(mapColors-1, math.Max(0, s.at(z))))
			picture.Pix[j*picture.Stride+i] = uint8(1 + at)
		}
	}
	return picture
}

// pixelBins says which bin the middle of each pixel lies in.
func pixelBins(edges Numbers, n int) []int {
	list := make([]int, n)
	low, high := edges[0], edges[len(edges)-1]
	for i := range list {
		v := low + (float64(i)+0.5)/float64(n)*(high-low)
		k := sort.SearchFloat64s(edges, v) - 1
		list[i] = min(max(k, 0), len(edges)-2)
	}
	return list
}
