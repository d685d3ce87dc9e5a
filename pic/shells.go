package pic

import (
	"math"

	"ionfall/internal/kernels"
)

// Between shells a particle flies straight while its position is a radius: the velocity turns
// against the directions at its place. After the kick of the field, in the directions at the
// start, with all lengths in cells and r the radius there,
//
//	r' = |(r + vx, vy, vz)|,   vx' = (vx (r + vx) + vt^2)/r',   vt' = vt r/r'
//
// with vt the velocity along the shell: vy alone for cylinders, whose axis is along z; vy and vz
// for spheres. This is free flight without error, and keeps the speed and the angular momentum r
// vt.
//
// Ref: J. P. Boris's rotation, in C. K. Birdsall and A. B. Langdon, Plasma Physics via Computer
// Simulation (1985), ch. 14.

// turn moves a particle at radius r [cells] for a step.
func turn(r, vx, vy, vz float64, spheres bool) (after, ux, uy, uz float64) {
	side := vy * vy
	if spheres {
		side += vz * vz
	}
	ahead := r + vx
	after = math.Sqrt(float64(ahead*ahead) + side)
	back := r / after
	if spheres {
		vz *= back
	}
	return after, (float64(vx*ahead) + side) / after, vy * back, vz
}

// pushShells is kernels.PushDeposit between shells: it kicks, moves, turns and deposits.
func (s *Simulation) pushShells(ch *chunk, field []kernels.Field, acc []uint64) int {
	inner := 1 / s.config.cellCurvature() // radius of the powered electrode [cells]
	spheres := s.config.Geometry.Shape == Spheres
	cells := s.config.Cells
	left := 0
	for i, x := range ch.x {
		j := int(x)
		f := &field[j]
		vx := ch.vx[i] + (f.A + float64((x-float64(j))*f.D))
		var r float64
		r, ch.vx[i], ch.vy[i], ch.vz[i] = turn(inner+x, vx, ch.vy[i], ch.vz[i], spheres)
		ch.x[i] = r - inner
		if !kernels.Inside(ch.x[i], cells) {
			ch.out[left] = int32(i)
			left++
			continue
		}
		kernels.Deposit(ch.x[i:i+1], acc)
	}
	return left
}

// mirror sends particle p back from the wall, as far in front of it as it was behind; between
// shells, where the parabola of a plane does not hold.
func (s *Simulation) mirror(w *worker, i int, ch *chunk, p int, wall Wall, depth float64) bool {
	x := max(depth, 0x1p-20)
	ch.vx[p] = math.Abs(ch.vx[p])
	if wall == Grounded {
		x, ch.vx[p] = float64(s.config.Cells)-x, -ch.vx[p]
	}
	if !kernels.Inside(x, s.config.Cells) {
		return false
	}
	ch.x[p] = x
	ch.tally.reflected[wall]++
	kernels.Deposit(ch.x[p:p+1], w.deposit[(w.step+1)&1][i])
	return true
}
