package report

import (
	"fmt"
	"math"
	"strings"
)

// drawPoints is how many points a curve may have before its extremes stand for the rest.
const drawPoints = 1500

// curve draws a series with the band of its error.
func (d *drawing) curve(s *Series, st style) {
	light, _ := curveColors()
	if len(s.SE) > 0 && !s.Dots {
		for _, path := range d.bandPaths(s) {
			d.add(`<path class="eb f%d" d="%s"/>`, st.color%len(light), path)
		}
	}
	if s.Dots {
		d.dots(s, st)
		return
	}
	if line := d.linePath(s); line != "" {
		d.add(`<path class="%s" d="%s"/>`, curveClass(s, st), line)
	}
}

// shown tells whether a value can stand on the axis.
func (d *drawing) shown(v float64) bool {
	return !math.IsNaN(v) && !math.IsInf(v, 0) && (!d.y.log || v > 0)
}

// edges are the x positions where the i-th value begins and ends.
func (d *drawing) edges(s *Series, i int) (from, to float64) {
	if !s.Steps || len(s.Width) == 0 {
		at := d.x.at(s.X[i])
		return at, at
	}
	return d.x.at(math.Max(d.x.low, s.X[i]-s.Width[i]/2)), d.x.at(s.X[i] + s.Width[i]/2)
}

func (d *drawing) linePath(s *Series) string {
	var b strings.Builder
	open := false
	for _, i := range thin(s.Y, drawPoints) {
		if !d.shown(s.Y[i]) {
			open = false
			continue
		}
		from, to := d.edges(s, i)
		letter := "L"
		if !open {
			letter, open = "M", true
		}
		y := d.y.at(s.Y[i])
		fmt.Fprintf(&b, "%s%.1f %.1f", letter, from, y)
		if to != from {
			fmt.Fprintf(&b, "H%.1f", to)
		}
	}
	return b.String()
}

// bandPaths are the outlines of value plus and minus error, one for each unbroken stretch.
func (d *drawing) bandPaths(s *Series) []string {
	var paths []string
	var upper, lower []string
	flush := func() {
		if len(upper) > 1 {
			path := "M" + strings.Join(upper, "L")
			for k := len(lower) - 1; k >= 0; k-- {
				path += "L" + lower[k]
			}
			paths = append(paths, path+"Z")
		}
		upper, lower = nil, nil
	}
	for i := range s.Y {
		if !d.shown(s.Y[i]) || math.IsNaN(s.SE[i]) {
			flush()
			continue
		}
		from, to := d.edges(s, i)
		up, down := d.y.at(s.Y[i]+s.SE[i]), d.y.at(math.Max(s.Y[i]-s.SE[i], d.floor()))
		upper = append(upper, fmt.Sprintf("%.1f %.1f", from, up))
		lower = append(lower, fmt.Sprintf("%.1f %.1f", from, down))
		if to != from {
			upper = append(upper, fmt.Sprintf("%.1f %.1f", to, up))
			lower = append(lower, fmt.Sprintf("%.1f %.1f", to, down))
		}
	}
	flush()
	return paths
}

// floor is the least value that the y axis can place.
func (d *drawing) floor() float64 {
	if d.y.log {
		return d.y.low
	}
	return math.Inf(-1)
}

func (d *drawing) dots(s *Series, st style) {
	light, _ := curveColors()
	for i := range s.X {
		if !d.shown(s.Y[i]) {
			continue
		}
		x, y := d.x.at(s.X[i]), d.y.at(s.Y[i])
		if s.Cross {
			d.add(`<path class="cross" d="M%.1f %.1fl9 9m0 -9l-9 9"/>`, x-4.5, y-4.5)
			continue
		}
		d.add(`<circle class="f%d" cx="%.1f" cy="%.1f" r="3.5"/>`, st.color%len(light), x, y)
		if len(s.SE) > 0 && s.SE[i] > 0 {
			d.add(`<path class="ln c%d" d="M%.1f %.1fV%.1f"/>`, st.color%len(light), x,
				d.y.at(s.Y[i]+s.SE[i]), d.y.at(math.Max(s.Y[i]-s.SE[i], d.floor())))
		}
	}
}

// thin picks rows so that at most about n are left: of each stretch its lowest and highest.
func thin(y Numbers, n int) []int {
	var list []int
	if len(y) <= n {
		for i := range y {
			list = append(list, i)
		}
		return list
	}
	step := (2*len(y) + n - 1) / n
	for from := 0; from < len(y); from += step {
		low, high := from, from
		for i := from; i < min(from+step, len(y)); i++ {
			if y[i] < y[low] {
				low = i
			}
			if y[i] > y[high] {
				high = i
			}
		}
		list = append(list, min(low, high))
		if low != high {
			list = append(list, max(low, high))
		}
	}
	return list
}
