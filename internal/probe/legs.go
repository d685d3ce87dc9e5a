package probe

import (
	"fmt"
	"math"
	"slices"
	"strconv"
)

// legs cuts the points into sweeps of one direction: where the group changes, and where the
// voltage turns for good.
func (r *reader) legs(points []point, f *File) []Sweep {
	var sweeps []Sweep
	if len(points) == 0 {
		r.fail(r.headerLine, 1, "", "no rows of numbers", "a row a point", "")
		return nil
	}
	lo, hi := points[0].voltage, points[0].voltage
	for _, p := range points {
		lo, hi = math.Min(lo, p.voltage), math.Max(hi, p.voltage)
	}
	// A tremble of the voltage is no turn.
	tremble := (hi - lo) / 20
	start := 0
	for start < len(points) {
		end := legEnd(points, start, tremble)
		leg := points[start:end]
		s := Sweep{
			Name: strconv.Itoa(len(sweeps) + 1),
			Up:   leg[len(leg)-1].voltage >= leg[0].voltage,
		}
		if leg[0].group != "" {
			s.Name = leg[0].group
		}
		for _, p := range leg {
			s.Voltage, s.Current = append(s.Voltage, p.voltage), append(s.Current, p.current)
		}
		if len(leg) < MinPoints {
			r.fail(leg[0].line, 0, "sweep "+s.Name, fmt.Sprintf("%d points", len(leg)),
				fmt.Sprintf("%d at least", MinPoints),
				"the second derivative of fewer points says nothing")
		}
		sweeps, start = append(sweeps, s), end
	}
	up := 0
	for _, s := range sweeps {
		if s.Up {
			up++
		}
	}
	f.Notes = append(f.Notes, fmt.Sprintf("%d sweeps, %d up and %d down, %d points", len(sweeps), up,
		len(sweeps)-up, len(points)))
	return sweeps
}

// legEnd is where the leg that starts there ends: at a change of group, or at the extreme from
// which the voltage comes back by more than the tremble.
func legEnd(points []point, start int, tremble float64) int {
	direction, extreme := 0.0, start
	for i := start + 1; i < len(points); i++ {
		if points[i].group != points[start].group {
			return i
		}
		step := points[i].voltage - points[extreme].voltage
		switch {
		case direction == 0:
			if math.Abs(step) > tremble {
				direction = math.Copysign(1, step)
			}
			if direction != 0 {
				extreme = i
			}
		case direction*step >= 0:
			extreme = i
		case math.Abs(step) > tremble:
			return extreme + 1
		}
	}
	return len(points)
}

// checkSweeps wants voltages that differ.
func (r *reader) checkSweeps(f *File) {
	for i := range f.Sweeps {
		v := slices.Clone(f.Sweeps[i].Voltage)
		slices.Sort(v)
		if n := len(slices.Compact(v)); n < MinPoints {
			r.fail(r.headerLine, 0, "sweep "+f.Sweeps[i].Name,
				fmt.Sprintf("%d different voltages", n), fmt.Sprintf("%d at least", MinPoints), "")
		}
	}
}

// orient makes electron current positive. Electrons, being light, give by far the larger current,
// at the positive end.
func (r *reader) orient(sign string, f *File) {
	low, high, span := ends(f.Sweeps)
	flip := sign == SignIon
	if sign == SignAuto || sign == "" {
		flip = high < 0 && math.Abs(high) > math.Abs(low)
	}
	reversed := math.Abs(low) > 3*math.Abs(high)
	if reversed {
		r.fail(r.headerLine, 0, "voltage",
			fmt.Sprintf("a current of %.3g A at the lowest and %.3g A at the highest voltages", low,
				high),
			"the larger one, of electrons, at the highest",
			"the sign of the voltage seems to be swapped, or the sweep never reaches electron current")
		return
	}
	if flip {
		for i := range f.Sweeps {
			for k := range f.Sweeps[i].Current {
				f.Sweeps[i].Current[k] = -f.Sweeps[i].Current[k]
			}
		}
		low, high = -low, -high
	}
	convention := "electron current is positive in the file"
	if flip {
		convention = "electron current is negative in the file, and was turned"
	}
	f.Notes = append(f.Notes, convention)
	if high <= 0 || high <= -low {
		r.fail(r.headerLine, 0, "current",
			fmt.Sprintf("%.3g A at the highest voltage of %.4g V", high, span[1]),
			"electron current, larger than the ion current",
			"a sweep that never reaches electron current tells no temperature and no density; go to "+
				"higher voltages, or check the sign")
	}
}

// ends are the medians of the currents in the lowest and the highest tenth of the voltages, and the
// range of the voltages.
func ends(sweeps []Sweep) (low, high float64, span [2]float64) {
	span = [2]float64{math.Inf(1), math.Inf(-1)}
	for _, s := range sweeps {
		span[0] = math.Min(span[0], slices.Min(s.Voltage))
		span[1] = math.Max(span[1], slices.Max(s.Voltage))
	}
	tenth := (span[1] - span[0]) / 10
	var a, b []float64
	for _, s := range sweeps {
		for k, v := range s.Voltage {
			if v <= span[0]+tenth {
				a = append(a, s.Current[k])
			}
			if v >= span[1]-tenth {
				b = append(b, s.Current[k])
			}
		}
	}
	return median(a), median(b), span
}

// median of a list; NaN of none.
func median(list []float64) float64 {
	if len(list) == 0 {
		return math.NaN()
	}
	list = slices.Clone(list)
	slices.Sort(list)
	n := len(list)
	return (list[(n-1)/2] + list[n/2]) / 2
}
