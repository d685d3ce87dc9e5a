package pic

import (
	"fmt"
	"math"

	"ionfall/internal/codec"
	"ionfall/internal/phys"
)

// The potential of the powered electrode follows from what connects it to the grounded one.
//
//	driven     phi[0] = V(t), whatever current that takes
//	isolated   no current: the surface charge sigma is what the electrode absorbed less what it
//	           emitted, and Gauss's law at the wall gives phi[0]
//
// Gauss's law reads eps0 (phi[0]-phi[1])/dx = sigma + q[0], with q[j] the charge per area at
// node j. The difference form of Poisson's equation has the influence of a sheet at node j on the
// electrode in closed form, so that no second solve is needed:
//
//	phi[0] = L/eps0 (sigma + sum over j of q[j] (1 - j/Cells))
//
// Ref: J. P. Verboncoeur, M. V. Alves, V. Vahedi and C. K. Birdsall, J. Comput. Phys. 104, 321
// (1993), the open circuit.

// electrodePotential returns phi[0] at step n; the net charge numbers of the nodes are in w.
func (s *Simulation) electrodePotential(w *worker, n int64) float64 {
	if !s.config.Isolated {
		return s.voltage[n%int64(len(s.voltage))]
	}
	cells := float64(s.config.Cells)
	sum := 0.0
	for j, z := range w.net {
		sum += float64(z * (cells - float64(j)))
	}
	charge := w.surface + float64(phys.ElementaryCharge*s.config.Weight*(sum/cells))
	return s.config.Gap / phys.Epsilon0 * charge
}

// chargeElectrode adds what an isolated electrode absorbed in the step before to w's count of its
// charge. Every worker adds the same numbers in the same order, so that all find the same bits.
func (s *Simulation) chargeElectrode(w *worker) {
	if s.config.Isolated {
		w.surface += float64(phys.ElementaryCharge * s.config.Weight * float64(s.absorbedAt(w.step)))
	}
}

// SurfaceCharge returns the charge on an isolated powered electrode [C/m2]; 0 if it is driven,
// when the drive supplies what the field needs.
func (s *Simulation) SurfaceCharge() float64 {
	if len(s.workers) == 0 {
		return 0
	}
	return s.workers[0].surface
}

func (s *Simulation) setSurfaceCharge(charge float64) {
	for _, w := range s.workers {
		w.surface = charge
	}
}

// restoreSurface reads the charge of an isolated electrode.
func (s *Simulation) restoreSurface(dec *codec.Decoder, prefix string) (float64, error) {
	if !s.config.Isolated {
		return 0, nil
	}
	list := dec.Float64s(prefix + "surface")
	if err := dec.Err(); err != nil {
		return 0, err
	}
	if len(list) != 1 || math.IsNaN(list[0]) || math.IsInf(list[0], 0) {
		return 0, fmt.Errorf("pic: saved charge %g of the isolated electrode, want one number", list)
	}
	return list[0], nil
}
