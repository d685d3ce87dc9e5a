package scan

import (
	"math"
	"slices"
)

// place returns the points in the unit cube of the axes: logarithms where a number is always
// above 0 and spans more than a factor of 3, indices where it is none.
func (p *Plan) place() [][]float64 {
	u := make([][]float64, len(p.Points))
	for i := range u {
		u[i] = make([]float64, len(p.Axes))
	}
	for k, a := range p.Axes {
		v := make([]float64, len(p.Points))
		index := map[string]float64{}
		low, high := math.Inf(1), math.Inf(-1)
		for i, point := range p.Points {
			v[i] = point.Values[k]
			if a.Text {
				if _, known := index[point.Texts[k]]; !known {
					index[point.Texts[k]] = float64(len(index))
				}
				v[i] = index[point.Texts[k]]
			}
			low, high = math.Min(low, v[i]), math.Max(high, v[i])
		}
		if low > 0 && high > 3*low && !a.Text {
			for i := range v {
				v[i] = math.Log(v[i])
			}
			low, high = math.Log(low), math.Log(high)
		}
		if high > low {
			for i := range v {
				u[i][k] = (v[i] - low) / (high - low)
			}
		}
	}
	return u
}

// coarseFirst orders places such that every beginning of the order fills the cube as evenly as it
// can: each is the one farthest from all before it, the first the one nearest to the middle. It
// stops after most.
//
// Ref: T. F. Gonzalez, Theor. Comput. Sci. 38, 293 (1985), farthest-first traversal (from memory).
func coarseFirst(u [][]float64, most int) []int {
	distance := make([]float64, len(u))
	first := 0
	for i := range u {
		distance[i] = math.Inf(1)
		if fromMiddle(u[i]) < fromMiddle(u[first]) {
			first = i
		}
	}
	var order []int
	for next := first; len(order) < min(most, len(u)); {
		order = append(order, next)
		distance[next] = -1
		best := -1
		for i := range u {
			if distance[i] < 0 {
				continue
			}
			distance[i] = math.Min(distance[i], squared(u[i], u[next]))
			if best < 0 || distance[i] > distance[best] {
				best = i
			}
		}
		if best < 0 {
			break
		}
		next = best
	}
	return order
}

func fromMiddle(x []float64) float64 {
	sum := 0.0
	for _, v := range x {
		sum += (v - 0.5) * (v - 0.5)
	}
	return sum
}

func squared(a, b []float64) float64 {
	sum := 0.0
	for i := range a {
		sum += (a[i] - b[i]) * (a[i] - b[i])
	}
	return sum
}

// mostSampled and mostCandidates bound the work of choosing a sample.
const mostSampled, mostCandidates = 40, 2000

// sample returns points that stand for the cost of all: each next one brings the others nearest to
// a point of the sample, weighted with their costs. Corners of the plan, where a discharge
// may be about to go out, stand for little of the cost and tend to be odd.
//
// The greedy solution of the facility location problem: G. Cornuejols, M. L. Fisher and
// G. L. Nemhauser, Manage. Sci. 23, 789 (1977) (from memory).
func sample(u [][]float64, cost []float64, count int) []int {
	var candidates []int
	step := (len(u) + mostCandidates - 1) / mostCandidates
	for i := 0; i < len(u); i += step {
		candidates = append(candidates, i)
	}
	far := float64(len(u[0]) + 1) // beyond the diagonal of the cube, squared
	nearest := make([]float64, len(u))
	for i := range nearest {
		nearest[i] = far
	}
	var chosen []int
	for len(chosen) < min(count, mostSampled, len(candidates)) {
		best, most := -1, -1.0
		for _, c := range candidates {
			gain := 0.0
			for _, i := range candidates {
				if d := squared(u[c], u[i]); d < nearest[i] {
					gain += cost[i] * (math.Sqrt(nearest[i]) - math.Sqrt(d))
				}
			}
			if gain > most && !slices.Contains(chosen, c) {
				best, most = c, gain
			}
		}
		chosen = append(chosen, best)
		for _, i := range candidates {
			nearest[i] = math.Min(nearest[i], squared(u[best], u[i]))
		}
	}
	return chosen
}

// order returns the indices of the points as they are to be run. Longest first keeps all cores
// busy to the end; a tenth of the points, which stand for all, goes before, from which the time of
// the rest is predicted. With a deadline all go coarse first: whatever is done then is a complete
// map.
func (p *Plan) order(cost []float64, deadline bool) []int {
	n := len(p.Points)
	if deadline {
		return coarseFirst(p.place(), n)
	}
	order := sample(p.place(), cost, max(len(p.Axes)+2, n/10))
	longest := func(a, b int) int {
		switch {
		case cost[a] > cost[b]:
			return -1
		case cost[a] < cost[b]:
			return 1
		}
		return a - b
	}
	slices.SortFunc(order, longest)
	var rest []int
	for i := range n {
		if !slices.Contains(order, i) {
			rest = append(rest, i)
		}
	}
	slices.SortFunc(rest, longest)
	return append(order, rest...)
}
