package pic

import (
	"ionfall/internal/kernels"
	"ionfall/internal/phys"
)

// sumCharge adds all workers' deposits for step n to w's node numbers, for every species.
func (s *Simulation) sumCharge(w *worker, n int64) {
	for i := range s.species {
		clear(w.number[i])
		for _, other := range s.workers {
			kernels.AddDensity(other.deposit[n&1][i], w.number[i])
		}
	}
}

// sumNet finds the net charge number of each node.
func (s *Simulation) sumNet(w *worker) {
	clear(w.net)
	for i := range s.species {
		z := float64(s.species[i].Charge)
		for j, number := range w.number[i] {
			w.net[j] += z * number
		}
	}
}

// solvePotential finds phi on the nodes from -phi” = rho/eps0 with phi[Cells] = 0 and phi[0]
// as the circuit has it.
func (s *Simulation) solvePotential(w *worker, n int64) {
	scale := phys.ElementaryCharge * s.config.Weight * s.config.CellSize() / phys.Epsilon0
	s.sumNet(w)
	for j, z := range w.net {
		w.rhs[j] = scale * z
	}
	cells := s.config.Cells
	w.phi[0] = s.electrodePotential(w, n)
	w.phi[cells] = 0
	s.poisson.solve(w.rhs, w.phi)
}

// differentiate finds E = -dphi/dx at nodes and the field that acts in each cell. At a wall,
// Gauss's law for the half cell: E[0] = E[1/2] - sigma/eps0, sigma the charge at the wall's
// node. With shells the node's field is that of the mean flux through the faces beside it.
func (s *Simulation) differentiate(w *worker) {
	cells := s.config.Cells
	dx := s.config.CellSize()
	sheet := phys.ElementaryCharge * s.config.Weight / phys.Epsilon0
	phi, e := w.phi, w.e
	e[0] = (phi[0]-phi[1])/dx - sheet*w.net[0]
	e[cells] = (phi[cells-1]-phi[cells])/dx + sheet*w.net[cells]
	half := 0.5 / dx
	if s.config.Geometry.Shape == Plates {
		for j := 1; j < cells; j++ {
			e[j] = (phi[j-1] - phi[j+1]) * half
		}
	} else {
		s.shellField(w, sheet)
	}
	if s.config.Scheme == EnergyConserving {
		for j := range w.fieldA {
			w.fieldA[j] = (phi[j] - phi[j+1]) / dx
		}
	} else {
		for j := range w.fieldA {
			w.fieldA[j] = e[j]
			w.fieldD[j] = e[j+1] - e[j]
		}
	}
	for i := range s.species {
		s.scaleField(w, i)
	}
}

// shellField finds the field at the nodes between shells.
func (s *Simulation) shellField(w *worker, sheet float64) {
	cells := s.config.Cells
	dx := s.config.CellSize()
	face, phi, e := s.poisson.face, w.phi, w.e
	left := face[0] * (phi[0] - phi[1]) / dx
	e[0] = left - sheet*w.net[0]
	for j := 1; j < cells; j++ {
		right := face[j] * (phi[j] - phi[j+1]) / dx
		e[j] = 0.5 * (left + right) / s.area[j]
		left = right
	}
	e[cells] = (left + sheet*w.net[cells]) / s.area[cells]
}

// scaleField turns the field into kicks of a species; for a sub-cycled one it adds to the sum
// since the last move, and takes the mean when the move is due.
func (s *Simulation) scaleField(w *worker, i int) {
	sp := &s.species[i]
	a, d, kick := w.fieldA, w.fieldD, w.kick[i]
	if sp.Every == 1 {
		k := sp.kickPerE
		for j := range kick {
			kick[j] = kernels.Field{A: k * a[j], D: k * d[j]}
		}
		return
	}
	sum := w.fieldSum[i]
	for j := range sum {
		sum[j].A += a[j]
		sum[j].D += d[j]
	}
	w.summed[i]++
	if !sp.due(w.step) {
		return
	}
	k := sp.kickPerE / float64(w.summed[i])
	for j := range sum {
		kick[j] = kernels.Field{A: k * sum[j].A, D: k * sum[j].D}
	}
	clear(sum)
	w.summed[i] = 0
}

// measureCurrent finds J from the wall's charge balance: what did not arrive as particles came
// through the circuit. sigma = eps0 E[0] changes by J dt + absorbed charge. To an isolated
// electrode there is no current.
func (s *Simulation) measureCurrent(w *worker, n int64) Circuit {
	dt := s.config.TimeStep()
	charge := phys.ElementaryCharge * s.config.Weight * float64(s.absorbedAt(n))
	voltage := w.phi[0]
	var current float64
	if s.haveField && !s.config.Isolated {
		current = (phys.Epsilon0*(w.e[0]-s.lastE0) - charge) / dt
		s.electric += 0.5 * (voltage + s.lastVoltage) * current * dt
	}
	s.lastE0, s.lastVoltage, s.haveField = w.e[0], voltage, true
	cells := s.config.Cells
	mid := 0.5 * (w.phi[cells/2] + w.phi[(cells+1)/2])
	return Circuit{Step: n, Voltage: voltage, Current: current, MidGap: mid}
}

// absorbedAt returns the net charge number the powered electrode took in the step before n.
func (s *Simulation) absorbedAt(n int64) int64 {
	var sum int64
	for _, w := range s.workers {
		sum += w.absorbed[n&1]
	}
	return sum
}

func (s *Simulation) absorbedNow() int64 { return s.absorbedAt(s.step) }
