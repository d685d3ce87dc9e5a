package scan

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"ionfall/internal/report"
	"ionfall/internal/store"
	"ionfall/internal/table"
)

// Map is a result against one or two inputs, the others at one value each.
type Map struct {
	Of     string
	Unit   string
	Axes   []Axis   // one or two, across and up
	Short  []string // their short names
	Fixed  []string // the other inputs and their values, for the title
	Points []MapPoint
	// Scattered says that other inputs vary, too: neighbours on the map must not be joined.
	Scattered bool
}

// MapPoint is a point of the scan on a map.
type MapPoint struct {
	X, Y          float64 // Y is 0 with one axis
	Value, StdErr float64 // NaN where there is none
	Status        string
	Verdict       string
}

// Sound reports whether the value may be coloured and joined with others.
func (p MapPoint) Sound() bool {
	return p.Status == Done && p.Verdict != store.Fail && !math.IsNaN(p.Value)
}

// Map takes a result from the table of points. against names one or two axes; at gives the texts of
// values of others, for those left out the value that most points have.
func (f *Folder) Map(t *table.Table, of string, against []string, at map[string]string) (
	*Map, error,
) {
	m := &Map{Of: of, Unit: table.UnitOf(of)}
	value, err := t.Floats(of)
	if err != nil {
		return nil, err
	}
	se, err := t.Floats(of + "_se")
	if err != nil {
		return nil, err
	}
	status, err := t.Texts("status")
	if err != nil {
		return nil, err
	}
	verdict, err := t.Texts("verdict")
	if err != nil {
		return nil, err
	}
	shown, keep, err := f.choose(m, against, at)
	if err != nil {
		return nil, err
	}
	for i, point := range f.Plan.Points {
		if !keep(point) {
			continue
		}
		p := MapPoint{
			X: point.Values[shown[0]], Value: value[i], StdErr: se[i], Status: status[i],
			Verdict: verdict[i],
		}
		if len(shown) == 2 {
			p.Y = point.Values[shown[1]]
		}
		m.Points = append(m.Points, p)
	}
	return m, nil
}

// choose finds the axes that are shown, and which points have the values of the others.
func (f *Folder) choose(m *Map, against []string, at map[string]string) (
	shown []int, keep func(Point) bool, err error,
) {
	axes := f.Plan.Axes
	names := []string{}
	for _, a := range axes {
		names = append(names, a.Path)
	}
	short := table.ShortNames(names)
	if len(against) == 0 {
		against = names[:min(2, len(names))]
	}
	for _, name := range against {
		k := slices.Index(names, name)
		if k < 0 || axes[k].Text || len(shown) == 2 || slices.Contains(shown, k) {
			return nil, nil, fmt.Errorf("got %s to draw against, want one or two of the inputs that "+
				"vary as numbers: %s", strings.Join(against, ", "), strings.Join(names, ", "))
		}
		shown, m.Axes, m.Short = append(shown, k), append(m.Axes, axes[k]), append(m.Short, short[k])
	}
	fixed := map[int]string{}
	for name := range at {
		if k := slices.Index(names, name); k < 0 || slices.Contains(shown, k) {
			return nil, nil, fmt.Errorf("got the value of %s, want that of an input that varies and "+
				"is not drawn against", name)
		}
	}
	sampled := f.Plan.sampled.method != methodGrid
	for k, a := range axes {
		if slices.Contains(shown, k) {
			continue
		}
		if sampled && at[a.Path] == "" {
			m.Scattered = true
			m.Fixed = append(m.Fixed, short[k]+" varies")
			continue
		}
		if fixed[k], err = f.valueOf(k, at[a.Path]); err != nil {
			return nil, nil, err
		}
		m.Fixed = append(m.Fixed, short[k]+" "+fixed[k])
	}
	return shown, func(p Point) bool {
		for k, text := range fixed {
			if p.Texts[k] != text {
				return false
			}
		}
		return true
	}, nil
}

// valueOf finds the value of an axis that a text stands for; with "", the most frequent one.
func (f *Folder) valueOf(k int, text string) (string, error) {
	count := map[string]int{}
	var order []string
	for _, p := range f.Plan.Points {
		if count[p.Texts[k]] == 0 {
			order = append(order, p.Texts[k])
		}
		count[p.Texts[k]]++
	}
	if text == "" {
		best := order[0]
		for _, v := range order {
			if count[v] > count[best] {
				best = v
			}
		}
		return best, nil
	}
	want, unit := splitUnit(text)
	for _, v := range order {
		number, own := splitUnit(v)
		if v == text || unit == own && math.Abs(number-want) <= 1e-5*math.Abs(number) {
			return v, nil
		}
	}
	return "", fmt.Errorf("%s: got %q, want one of %s", f.Plan.Axes[k].Path, text,
		strings.Join(order, ", "))
}

// raster is a map whose points fill a grid: NaN where there is no sound value.
type raster struct {
	x, y []float64
	z    [][]float64 // by column, then row
}

// raster returns the points as a grid, nil if they are none.
func (m *Map) raster() *raster {
	if len(m.Axes) != 2 || m.Scattered {
		return nil
	}
	r := &raster{}
	for _, p := range m.Points {
		r.x, r.y = append(r.x, p.X), append(r.y, p.Y)
	}
	slices.Sort(r.x)
	slices.Sort(r.y)
	r.x, r.y = slices.Compact(r.x), slices.Compact(r.y)
	if len(r.x) < 2 || len(r.y) < 2 || len(r.x)*len(r.y) > len(m.Points) {
		return nil
	}
	for range r.x {
		r.z = append(r.z, missing(len(r.y)))
	}
	for _, p := range m.Points {
		if p.Sound() {
			i, _ := slices.BinarySearch(r.x, p.X)
			j, _ := slices.BinarySearch(r.y, p.Y)
			r.z[i][j] = p.Value
		}
	}
	return r
}

// contour returns where the value crosses a level.
func (r *raster) contour(level float64) []report.Segment {
	return report.Contour(r.x, r.y, r.z, level)
}
