package diagnostics

import "math"

// bins are intervals of energy [eV], looked up by a table with steps of the finest width.
type bins struct {
	edges  []float64
	index  []int32
	perBin float64 // table entries per eV
}

// uniformBins covers 0..top by about n bins of a round width.
func uniformBins(top float64, n int) *bins {
	width := roundUp(top / float64(n))
	count := int(math.Ceil(top / width))
	edges := make([]float64, count+1)
	for i := range edges {
		edges[i] = float64(i) * width
	}
	return newBins(edges, width)
}

// electronBins are 0.1 eV wide at low energy, where cold groups sit, and widen to 2 % of the
// energy.
func electronBins(top float64) *bins {
	const finest = 0.1
	edges := []float64{0}
	for e := 0.0; e < top; {
		e = finest * math.Round((e+max(finest, 0.02*e))/finest)
		edges = append(edges, e)
	}
	return newBins(edges, finest)
}

func newBins(edges []float64, finest float64) *bins {
	b := &bins{edges: edges, perBin: 1 / finest}
	k := 0
	for i := range int(math.Round(edges[len(edges)-1] / finest)) {
		for (float64(i)+0.5)*finest >= edges[k+1] {
			k++
		}
		b.index = append(b.index, int32(k))
	}
	return b
}

// roundUp returns the next of 1, 2, 5 x 10^k.
func roundUp(x float64) float64 {
	unit := math.Pow(10, math.Floor(math.Log10(x)))
	for _, m := range []float64{1, 2, 5, 10} {
		if m*unit >= 0.999999*x {
			return m * unit
		}
	}
	return 10 * unit
}

// find returns the bin of an energy; what lies above the top goes to the last one.
func (b *bins) find(energy float64) int {
	i := int(energy * b.perBin)
	if i >= len(b.index) {
		return len(b.edges) - 2
	}
	return int(b.index[i])
}

func (b *bins) count() int           { return len(b.edges) - 1 }
func (b *bins) center(k int) float64 { return 0.5 * (b.edges[k] + b.edges[k+1]) }
func (b *bins) width(k int) float64  { return b.edges[k+1] - b.edges[k] }
