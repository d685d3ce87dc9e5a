package report

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"

	"ionfall/internal/store"
	"ionfall/internal/table"
)

const (
	// mostMaps of one result: the other inputs may have many values.
	mostMaps = 12
	// leastFilled is the part of the cells of a map that must have a point.
	leastFilled = 0.5
	// mapContours between the ends of the colours.
	mapContours = 6
)

// Mark is a point of a map that is not coloured, and why not.
type Mark struct {
	X      float64 `json:"x"`
	Y      float64 `json:"y"`
	Failed bool    `json:"failed"` // it was computed, and is not to be used
}

// Maps draws the results over the first two inputs that vary, where the points fill a grid: a map
// for each set of values of the other inputs.
func (s *Scan) Maps() []Figure {
	inputs := s.varied()
	if len(inputs) < 2 {
		return nil
	}
	others := slices.DeleteFunc(slices.Clone(s.Inputs), func(c ScanColumn) bool {
		return c.Name == inputs[0].Name || c.Name == inputs[1].Name
	})
	var list []Figure
	for _, result := range s.shown() {
		for k, group := range s.groups(others) {
			if k == mostMaps {
				break
			}
			if f, ok := s.mapOf(result, inputs, group); ok {
				f.ID = slug(fmt.Sprintf("map-%s-%d", result.Name, k+1))
				list = append(list, f)
			}
		}
	}
	return list
}

// group is the rows of points that have the other inputs in common.
type group struct {
	rows []int
	at   string
}

func (s *Scan) groups(others []ScanColumn) []group {
	var list []group
	index := map[string]int{}
	names := s.shortNames(others)
	for i := range s.Points {
		var parts []string
		for k, c := range others {
			text := strings.TrimSpace(c.cell(i, false).Text + " " + c.Unit)
			parts = append(parts, names[k]+" "+text)
		}
		at := strings.Join(parts, ", ")
		k, known := index[at]
		if !known {
			k, index[at] = len(list), len(list)
			list = append(list, group{at: at})
		}
		list[k].rows = append(list[k].rows, i)
	}
	return list
}

// shortNames are those of inputs, distinct among all inputs of the scan.
func (s *Scan) shortNames(columns []ScanColumn) []string {
	var all, list []string
	for _, c := range s.Inputs {
		all = append(all, c.Name)
	}
	short := table.ShortNames(all)
	for _, c := range columns {
		list = append(list, short[slices.Index(all, c.Name)])
	}
	return list
}

// mapOf draws a result of some points over two inputs. Points that failed, or have no result
// yet, are marked and neither coloured nor joined by contours.
func (s *Scan) mapOf(result ScanColumn, inputs []ScanColumn, g group) (Figure, bool) {
	x, y := some(inputs[0].Values, g.rows), some(inputs[1].Values, g.rows)
	ux, uy := distinct(x), distinct(y)
	cells := len(ux) * len(uy)
	if len(ux) < 2 || len(uy) < 2 || len(g.rows) > cells ||
		float64(len(g.rows)) < leastFilled*float64(cells) {
		return Figure{}, false
	}
	names := s.shortNames(inputs[:2])
	name := table.ResultName(result.Name)
	m := &Map{
		XEdges: between(ux), YEdges: between(uy), Z: make(Numbers, cells), SE: make(Numbers, cells),
		Value: Axis{Name: result.Name, Label: name, Unit: result.Unit}, Close: true,
		MiddleX: ux, MiddleY: uy,
	}
	for i := range m.Z {
		m.Z[i], m.SE[i] = math.NaN(), math.NaN()
	}
	for k, row := range g.rows {
		if p := s.Points[row]; p.Verdict == store.Fail || math.IsNaN(result.Values[row]) {
			m.Marks = append(m.Marks, Mark{x[k], y[k], p.Verdict == store.Fail})
			continue
		}
		at := sort.SearchFloat64s(uy, y[k])*len(ux) + sort.SearchFloat64s(ux, x[k])
		m.Z[at], m.SE[at] = result.Values[row], result.SE[row]
	}
	f := Figure{
		Kind: "scan", Title: name + " over " + names[0] + " and " + names[1],
		About: "Colours are the points' own values, the numbers their values with standard errors " +
			"where there is room. Crosses are points whose verdict is FAIL, squares points without a " +
			"result: no contour passes by them.",
		Runs: []RunMark{{s.Name, store.OK}},
		X:    Axis{Name: inputs[0].Name, Label: names[0], Unit: inputs[0].Unit},
		Y:    Axis{Name: inputs[1].Name, Label: names[1], Unit: inputs[1].Unit}, Map: m,
	}
	if g.at != "" {
		f.Title += "; " + g.at
	}
	f.Alt = mapAlt(&f)
	return f, true
}

func some(v Numbers, rows []int) Numbers {
	list := make(Numbers, len(rows))
	for k, i := range rows {
		list[k] = v[i]
	}
	return list
}

// overlay draws contours, values and marks over a map of single points.
func (d *drawing) overlay() {
	m := d.f.Map
	nx, ny := len(m.MiddleX), len(m.MiddleY)
	if nx == 0 {
		return
	}
	z := make([][]float64, nx)
	for i := range z {
		for j := range ny {
			z[i] = append(z[i], m.Z[j*nx+i])
		}
	}
	low, high := m.limits()
	var path strings.Builder
	for k := range mapContours {
		level := low + (high-low)*float64(k+1)/(mapContours+1)
		for _, s := range Contour(m.MiddleX, m.MiddleY, z, level) {
			fmt.Fprintf(&path, "M%.1f %.1fL%.1f %.1f", d.x.at(s.X0), d.y.at(s.Y0), d.x.at(s.X1),
				d.y.at(s.Y1))
		}
	}
	d.add(`<path class="contour" d="%s"/>`, path.String())
	if nx <= 6 && ny <= 12 {
		for i := range z {
			for j, v := range z[i] {
				if !math.IsNaN(v) {
					d.add(`<text class="cell" x="%.1f" y="%.1f">%s</text>`, d.x.at(m.MiddleX[i]),
						d.y.at(m.MiddleY[j])+4, estimate(v, m.SE[j*nx+i], ""))
				}
			}
		}
	}
	for _, mark := range m.Marks {
		x, y := d.x.at(mark.X), d.y.at(mark.Y)
		if mark.Failed {
			d.add(`<path class="cross" d="M%.1f %.1fl9 9m0 -9l-9 9"/>`, x-4.5, y-4.5)
		} else {
			d.add(`<path class="open" d="M%.1f %.1fh9v9h-9z"/>`, x-4.5, y-4.5)
		}
	}
}
