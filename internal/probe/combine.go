package probe

import (
	"cmp"
	"fmt"
	"math"
	"slices"
)

// cleaned is what is left of the sweeps: one set of points in the order of the voltage.
type cleaned struct {
	data
	// perSweep are the currents of each sweep at the voltages, NaN where it has none.
	perSweep        [][]float64
	outliers        int
	clippedHigh     bool
	clippedLow      bool
	clipVoltage     float64
	floor, relative float64 // noise of a point: [A], and as a part of the current
	atFloor         bool    // the noise is below what the tables of the model follow
}

const (
	// maxFitPoints of a pooled characteristic; more are averaged in bins.
	maxFitPoints = 800
	// outlierSigmas from its neighbours make a point an outlier.
	outlierSigmas = 7
	// outlierPart of the current is no outlier: a knee bends as much without noise.
	outlierPart = 0.02
	// clippedRun is how many equal currents at the end of the range are the limit of the meter.
	clippedRun = 4
	// modelPart and modelFloor are how well the tables of the model follow a characteristic, as a
	// part of the current and of the largest current.
	modelPart, modelFloor = 3e-4, 3e-6
)

// pair is a point of a sweep.
type pair struct{ v, i float64 }

// sortedPairs of a sweep, with the voltage that the series resistance takes taken away.
func sortedPairs(s *Sweep, resistance float64) []pair {
	list := make([]pair, len(s.Voltage))
	for k, v := range s.Voltage {
		list[k] = pair{v - resistance*s.Current[k], s.Current[k]}
	}
	slices.SortStableFunc(list, func(a, b pair) int { return cmp.Compare(a.v, b.v) })
	return list
}

// clean drops clipped and outlying points and averages the sweeps on common voltages.
func clean(sweeps []Sweep, setup *Setup) (*cleaned, error) {
	c := &cleaned{}
	var all [][]pair
	lo, hi, most := math.Inf(1), math.Inf(-1), 0
	for i := range sweeps {
		list := c.dropClipped(sortedPairs(&sweeps[i], setup.Resistance))
		list = c.dropOutliers(list)
		if len(list) < MinPoints {
			return nil, fmt.Errorf("sweep %s has %d points that are neither clipped nor outliers, want "+
				"%d at least", sweeps[i].Name, len(list), MinPoints)
		}
		all = append(all, list)
		lo, hi = math.Min(lo, list[0].v), math.Max(hi, list[len(list)-1].v)
		most = max(most, len(list))
	}
	bins := min(most, maxFitPoints)
	width := (hi - lo) / float64(bins-1)
	c.average(all, lo, width, bins)
	c.noise()
	return c, nil
}

// average fills bins: each sweep gives its mean in each bin.
func (c *cleaned) average(all [][]pair, lo, width float64, bins int) {
	volts, count := make([]float64, bins), make([]float64, bins)
	values := make([][]float64, len(all))
	for s, list := range all {
		sum, number := make([]float64, bins), make([]float64, bins)
		for _, p := range list {
			b := min(max(int((p.v-lo)/width+0.5), 0), bins-1)
			sum[b], number[b] = sum[b]+p.i, number[b]+1
			volts[b], count[b] = volts[b]+p.v, count[b]+1
		}
		for b := range sum {
			sum[b] /= number[b] // NaN for an empty bin
		}
		values[s] = sum
	}
	c.perSweep = make([][]float64, len(all))
	for b := range bins {
		mean, n := 0.0, 0.0
		for s := range values {
			if !math.IsNaN(values[s][b]) {
				mean, n = mean+values[s][b], n+1
			}
		}
		if n == 0 {
			continue
		}
		c.voltage = append(c.voltage, volts[b]/count[b])
		c.current = append(c.current, mean/n)
		for s := range values {
			c.perSweep[s] = append(c.perSweep[s], values[s][b])
		}
	}
}

// dropClipped takes equal currents at the ends away: the meter had no more range.
func (c *cleaned) dropClipped(list []pair) []pair {
	top, bottom := math.Inf(-1), math.Inf(1)
	for _, p := range list {
		top, bottom = math.Max(top, p.i), math.Min(bottom, p.i)
	}
	same := func(limit float64) int {
		n := 0
		for _, p := range list {
			if math.Abs(p.i-limit) <= 1e-9*math.Abs(limit) {
				n++
			}
		}
		return n
	}
	if same(top) >= clippedRun {
		c.clippedHigh = true
		at := slices.IndexFunc(list, func(p pair) bool { return p.i >= top*(1-1e-9) })
		c.clipVoltage = list[at].v
		list = list[:at]
	}
	if same(bottom) >= clippedRun && bottom < 0 {
		c.clippedLow = true
		list = slices.DeleteFunc(list, func(p pair) bool { return p.i <= bottom*(1-1e-9) })
	}
	return list
}

// dropOutliers takes points away that lie far from a line through the neighbours, by the scatter of
// all such distances around.
//
// Ref: F. R. Hampel, J. Am. Stat. Assoc. 69, 383 (1974) for the median deviation as a scale.
func (c *cleaned) dropOutliers(list []pair) []pair {
	const passes = 6 // a wild point spoils the line of its neighbours, so the worst goes first
	for range passes {
		r := localResiduals(list)
		keep := list[:0:0]
		for k, p := range list {
			lo, hi := max(0, k-15), min(len(r), k+16)
			scale := 1.4826 * median(absolutes(r[lo:hi]))
			worst := slices.Max(absolutes(r[max(0, k-2):min(len(r), k+3)]))
			size := math.Abs(r[k])
			if size == worst && size > outlierSigmas*scale+outlierPart*math.Abs(p.i) {
				c.outliers++
				continue
			}
			keep = append(keep, p)
		}
		if len(keep) == len(list) {
			break
		}
		list = keep
	}
	return list
}

// localResiduals are the distances of the points from the median of the parabolas' forecasts of
// their neighbours: third differences, scaled to the noise of one point.
func localResiduals(list []pair) []float64 {
	r := make([]float64, len(list))
	for k := range list {
		if k < 2 || k+2 >= len(list) {
			continue
		}
		// A cubic through the two points on each side at equal steps gives (-1, 4, 4, -1)/6.
		at := (4*(list[k-1].i+list[k+1].i) - list[k-2].i - list[k+2].i) / 6
		r[k] = (list[k].i - at) / math.Sqrt(1+34.0/36)
	}
	return r
}

func absolutes(list []float64) []float64 {
	out := make([]float64, len(list))
	for k, x := range list {
		out[k] = math.Abs(x)
	}
	return out
}

// noise estimates the error of each point of the average: a floor, and a part of the current.
func (c *cleaned) noise() {
	list := make([]pair, len(c.voltage))
	for k := range list {
		list[k] = pair{c.voltage[k], c.current[k]}
	}
	r := localResiduals(list)
	var low, high []float64
	top := slices.Max(c.current)
	for k, p := range list {
		if k < 2 || k+2 >= len(list) {
			continue
		}
		switch {
		case math.Abs(p.i) < top/50:
			low = append(low, math.Abs(r[k]))
		case p.i > top/4:
			high = append(high, math.Abs(r[k])/p.i)
		}
	}
	if len(low) < 8 {
		low = absolutes(r)
	}
	c.floor = math.Max(1.4826*median(low), 1e-7*top)
	if len(high) >= 8 {
		c.relative = 1.4826 * median(high)
	}
	// What the floor explains is no part of the current.
	c.relative = math.Sqrt(math.Max(0, c.relative*c.relative-math.Pow(1.5*c.floor/top, 2)))
	c.atFloor = c.relative < modelPart && c.floor < modelFloor*top
	c.relative = math.Max(c.relative, modelPart)
	c.floor = math.Max(c.floor, modelFloor*top)
	c.sigma = make([]float64, len(c.voltage))
	for k, i := range c.current {
		c.sigma[k] = math.Hypot(c.floor, c.relative*i)
	}
}
