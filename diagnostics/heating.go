package diagnostics

import (
	"math"

	"ionfall/internal/stats"
	"ionfall/pic"
)

// ElectronPowers returns the power that electrons take from the field in the powered sheath, in the
// bulk, and in the grounded sheath, per area of the powered electrode [W/m2]. A sheath reaches as
// far as its edge (Brinkmann 2007) does in any phase. The standard errors are upper bounds: the
// sums of those of the nodes.
func (r *Recorder) ElectronPowers() (powered, bulk, grounded stats.Estimate) {
	v := r.averages.profiles[gridFixed+gridPower]
	edge := [2]float64{}
	for wall := range edge {
		for _, s := range r.averages.circuit[circuitSheath+wall].Mean {
			edge[wall] = math.Max(edge[wall], s)
		}
	}
	dx := r.config.CellSize()
	parts := [3]*stats.Estimate{&powered, &bulk, &grounded}
	for j := range v.Mean {
		at := float64(j) * dx
		part := &bulk
		switch {
		case at < edge[pic.Powered]:
			part = &powered
		case at > r.config.Gap-edge[pic.Grounded]:
			part = &grounded
		}
		part.Mean += v.Mean[j] * r.volume[j]
		part.StdErr += v.StdErr(j) * r.volume[j]
	}
	for _, p := range parts {
		p.N, p.Batch = v.N, r.batch
	}
	return powered, bulk, grounded
}
