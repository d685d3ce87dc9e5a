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

// SheathVoltageRatio returns the largest voltage of the grounded sheath over that of the powered
// one, from the ions alone: that of a widest sheath is e/eps0 times the integral of n x S(x)/S(0),
// with x from the wall and S the area. The standard error is an upper bound, as that of
// ElectronPowers.
//
// Ref: U. Czarnetzki, J. Schulze, E. Schuengel and Z. Donko, Plasma Sources Sci. Technol. 20,
// 024010 (2011), whose symmetry parameter this is, with the shape of the sheaths in the integral.
func (r *Recorder) SheathVoltageRatio() stats.Estimate {
	var sum, se [2]float64
	for wall := range sum {
		edge := 0.0
		for _, s := range r.averages.circuit[circuitSheath+wall].Mean {
			edge = math.Max(edge, s)
		}
		for i, rec := range r.species {
			if rec.charge == 0 || i == 0 && rec.charge < 0 {
				continue
			}
			v := r.averages.profiles[gridFixed+gridPerSpecies*i+gridDensity]
			for j := range v.Mean {
				at := float64(j) * r.config.CellSize()
				part := r.config.Area(float64(j)) / r.config.WallArea(pic.Wall(wall))
				if pic.Wall(wall) == pic.Grounded {
					at = r.config.Gap - at
				}
				if at < edge {
					sum[wall] += float64(rec.charge) * v.Mean[j] * at * part
					se[wall] += math.Abs(float64(rec.charge)) * v.StdErr(j) * at * part
				}
			}
		}
	}
	n, length := r.Batches()
	ratio := sum[pic.Grounded] / sum[pic.Powered]
	return stats.Estimate{
		Mean:   ratio,
		StdErr: ratio * math.Hypot(se[0]/sum[0], se[1]/sum[1]),
		N:      n, Batch: length,
	}
}
