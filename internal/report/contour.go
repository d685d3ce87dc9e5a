package report

import "math"

// Segment is a piece of a contour.
type Segment struct{ X0, Y0, X1, Y1 float64 }

// Contour returns where values on a grid, z[column][row], cross a level. Each cell is cut into four
// triangles about its middle, which leaves no ambiguous case. A cell with a corner that is NaN has
// no contour: nothing is interpolated over a value that is not sound.
func Contour(x, y []float64, z [][]float64, level float64) []Segment {
	var list []Segment
	for i := range len(x) - 1 {
		for j := range len(y) - 1 {
			corners := [4][3]float64{
				{x[i], y[j], z[i][j]},
				{x[i+1], y[j], z[i+1][j]},
				{x[i+1], y[j+1], z[i+1][j+1]},
				{x[i], y[j+1], z[i][j+1]},
			}
			var middle [3]float64
			for _, c := range corners {
				for k := range middle {
					middle[k] += c[k] / 4
				}
			}
			if math.IsNaN(middle[2]) {
				continue
			}
			for k := range corners {
				triangle := [3][3]float64{corners[k], corners[(k+1)%4], middle}
				if s, ok := cut(triangle, level); ok {
					list = append(list, s)
				}
			}
		}
	}
	return list
}

// cut returns where a plane triangle crosses a level.
func cut(t [3][3]float64, level float64) (Segment, bool) {
	var ends [][2]float64
	for k := range t {
		a, b := t[k], t[(k+1)%3]
		if a[2] >= level == (b[2] >= level) {
			continue
		}
		u := (level - a[2]) / (b[2] - a[2])
		ends = append(ends, [2]float64{a[0] + u*(b[0]-a[0]), a[1] + u*(b[1]-a[1])})
	}
	if len(ends) != 2 {
		return Segment{}, false
	}
	return Segment{ends[0][0], ends[0][1], ends[1][0], ends[1][1]}, true
}
