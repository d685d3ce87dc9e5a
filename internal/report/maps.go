package report

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"

	"ionfall/internal/table"
)

// gridMap takes a quantity on two axes from the rows of a tidy table. Bins reach half way to
// their neighbours, or by the width in width_eV where that is given.
func gridMap(t *table.Table, rows []int, x, y, z string, xFactor float64) (*Map, error) {
	xs, err := pick(t, x, rows, xFactor)
	if err != nil {
		return nil, err
	}
	ys, err := pick(t, y, rows, 1)
	if err != nil {
		return nil, err
	}
	zs, err := pick(t, z, rows, 1)
	if err != nil {
		return nil, err
	}
	ses := errorsOf(t, z, rows, 1)
	ux, uy := distinct(xs), distinct(ys)
	m := &Map{
		XEdges: between(ux), YEdges: between(uy),
		Z: make(Numbers, len(ux)*len(uy)), SE: make(Numbers, len(ux)*len(uy)),
	}
	for i := range m.Z {
		m.Z[i], m.SE[i] = math.NaN(), math.NaN()
	}
	for i := range zs {
		at := sort.SearchFloat64s(uy, ys[i])*len(ux) + sort.SearchFloat64s(ux, xs[i])
		m.Z[at] = zs[i]
		if ses != nil {
			m.SE[at] = ses[i]
		}
	}
	return m, nil
}

func distinct(v Numbers) Numbers {
	u := slices.Clone(v)
	slices.Sort(u)
	return slices.Compact(u)
}

// between puts edges half way between the middles.
func between(mid Numbers) Numbers {
	n := len(mid)
	if n == 0 {
		return Numbers{0, 1}
	}
	if n == 1 {
		return Numbers{mid[0] - 0.5, mid[0] + 0.5}
	}
	edges := make(Numbers, n+1)
	for i := 1; i < n; i++ {
		edges[i] = 0.5 * (mid[i-1] + mid[i])
	}
	edges[0] = mid[0] - (edges[1] - mid[0])
	edges[n] = mid[n-1] + (mid[n-1] - edges[n-1])
	return edges
}

// trimMap cuts the empty upper columns and rows of a map, keeping some room.
func trimMap(m *Map) {
	nx, ny := len(m.XEdges)-1, len(m.YEdges)-1
	lastX, lastY := 0, 0
	for i, z := range m.Z {
		if z > 0 {
			lastX, lastY = max(lastX, i%nx), max(lastY, i/nx)
		}
	}
	keepX, keepY := min(nx, lastX+2), min(ny, lastY+2)
	z, se := make(Numbers, 0, keepX*keepY), make(Numbers, 0, keepX*keepY)
	for j := range keepY {
		z = append(z, m.Z[j*nx:j*nx+keepX]...)
		se = append(se, m.SE[j*nx:j*nx+keepX]...)
	}
	m.XEdges, m.YEdges, m.Z, m.SE = m.XEdges[:keepX+1], m.YEdges[:keepY+1], z, se
}

// limits are the ends of the colours: symmetric for a signed quantity, three decades for a
// logarithmic one.
func (m *Map) limits() (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, z := range m.Z {
		if math.IsNaN(z) || m.Value.Log && z <= 0 {
			continue
		}
		low, high = math.Min(low, z), math.Max(high, z)
	}
	switch {
	case low > high && m.Value.Log:
		return 0.1, 1
	case low > high:
		return 0, 1
	case m.Value.Log:
		low = math.Max(low, high/mapDecades)
		if low == high {
			low = high / 10
		}
	case m.Signed:
		high = math.Max(math.Abs(low), math.Abs(high))
		low = -high
	case low >= 0 && !m.Close:
		low = 0
	}
	if low == high {
		high = low + 1
	}
	return low, high
}

// mapDecades is how far below the largest value a logarithmic map reaches.
const mapDecades = 1e3

// mapAlt says where a map is largest and smallest.
func mapAlt(f *Figure) string {
	m := f.Map
	nx := len(m.XEdges) - 1
	best, least := -1, -1
	for i, z := range m.Z {
		if math.IsNaN(z) {
			continue
		}
		if best < 0 || z > m.Z[best] {
			best = i
		}
		if least < 0 || z < m.Z[least] {
			least = i
		}
	}
	if best < 0 {
		return f.Title + ": no values."
	}
	place := func(i int) string {
		return fmt.Sprintf("%s %s at %s %s %s and %s %s %s", short(m.Z[i]), m.Value.Unit,
			f.X.Label, short(middle(m.XEdges, i%nx)), f.X.Unit,
			f.Y.Label, short(middle(m.YEdges, i/nx)), f.Y.Unit)
	}
	text := f.Title + ": largest, " + place(best)
	if m.Signed {
		text += "; smallest, " + place(least)
	}
	return text + "."
}

// altOf says in words what the curves of a figure show.
func altOf(f *Figure) string {
	var texts []string
	for _, s := range f.Series {
		if s.Law {
			continue
		}
		named := s
		named.Label = f.Name(s.Label, s.Run)
		texts = append(texts, peakText(named, f.X, f.Y))
	}
	return f.Title + ": " + strings.Join(texts, "; ") + "."
}

// slug is a name for the ID of an element.
func slug(name string) string {
	var b strings.Builder
	for _, c := range strings.ToLower(name) {
		switch {
		case c >= 'a' && c <= 'z', c >= '0' && c <= '9':
			b.WriteRune(c)
		case c == '+':
			b.WriteString("plus")
		case c == '-':
			b.WriteString("minus")
		default:
			b.WriteByte('_')
		}
	}
	return b.String()
}

// numbered makes the IDs of figures that there is one of for each run differ, and names the run.
func numbered(list []Figure, runs int) []Figure {
	if runs < 2 {
		return list
	}
	seen := map[string]int{}
	for i := range list {
		f := &list[i]
		seen[f.ID]++
		f.Title += ", " + f.Runs[0].Name
		f.ID = fmt.Sprintf("%s-%d", f.ID, seen[f.ID])
	}
	return list
}
