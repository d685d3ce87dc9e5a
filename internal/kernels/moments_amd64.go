//go:build amd64 && !purego

package kernels

func addMomentsWithAVX2(
	x, vx, vy, vz []float64, field []Field, sums []Moments, energy []float64,
) int {
	vx, vy, vz, energy = vx[:len(x)], vy[:len(x)], vz[:len(x)], energy[:len(x)]
	sums = sums[:len(field)]
	done, fast := 0, 0
	for len(x)-done >= vectorLanes {
		n := min(block, (len(x)-done)&^(vectorLanes-1))
		fast += addMomentsAVX2(&x[done], &vx[done], &vy[done], &vz[done], n,
			&field[0].A, len(field), &sums[0].Power, &energy[done])
		done += n
	}
	return fast + AddMoments(x[done:], vx[done:], vy[done:], vz[done:], field, sums, energy[done:])
}

func addMomentsWithAVX512(
	x, vx, vy, vz []float64, field []Field, sums []Moments, energy []float64,
) int {
	vx, vy, vz, energy = vx[:len(x)], vy[:len(x)], vz[:len(x)], energy[:len(x)]
	sums = sums[:len(field)]
	done, fast := 0, 0
	for len(x)-done >= vectorLanes {
		n := min(block, (len(x)-done)&^(vectorLanes-1))
		fast += addMomentsAVX512(&x[done], &vx[done], &vy[done], &vz[done], n,
			&field[0].A, len(field), &sums[0].Power, &energy[done])
		done += n
	}
	return fast + AddMoments(x[done:], vx[done:], vy[done:], vz[done:], field, sums, energy[done:])
}
