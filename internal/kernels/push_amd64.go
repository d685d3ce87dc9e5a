//go:build amd64 && !purego

package kernels

import "golang.org/x/sys/cpu"

//go:generate go -C asm run .

const (
	// vectorLanes is how many particles the assembly takes at a time.
	vectorLanes = 8
	// block is how many particles a call of the assembly takes at most, in 2 or 3 us: goroutines
	// cannot be stopped within it.
	block = 2048
)

// native returns the sets of this processor, the fastest last.
func native() []Set {
	var list []Set
	x := cpu.X86
	if x.HasAVX2 && x.HasBMI1 && x.HasPOPCNT {
		list = append(list, Set{"avx2", pushDepositWithAVX2, addMomentsWithAVX2})
		if x.HasAVX512F && x.HasAVX512DQ && x.HasAVX512VL {
			list = append(list, Set{"avx512", pushDepositWithAVX512, addMomentsWithAVX512})
		}
	}
	return list
}

func pushDepositWithAVX2(x, v []float64, field []Field, acc []uint64, out []int32) int {
	v, acc, out = v[:len(x)], acc[:len(field)], out[:len(x)]
	done, left := 0, 0
	for len(x)-done >= vectorLanes {
		n := min(block, (len(x)-done)&^(vectorLanes-1))
		left += pushAVX2(&x[done], &v[done], n, &field[0].A, len(field), &acc[0], &out[left], done)
		done += n
	}
	return pushRest(x, v, field, acc, out, done, left)
}

func pushDepositWithAVX512(x, v []float64, field []Field, acc []uint64, out []int32) int {
	v, acc, out = v[:len(x)], acc[:len(field)], out[:len(x)]
	done, left := 0, 0
	for len(x)-done >= vectorLanes {
		n := min(block, (len(x)-done)&^(vectorLanes-1))
		left += pushAVX512(&x[done], &v[done], n, &field[0].A, len(field), &acc[0], &out[left], done)
		done += n
	}
	return pushRest(x, v, field, acc, out, done, left)
}

// pushRest moves the particles from index done on, fewer than a vector holds, and returns the
// number of all that left.
func pushRest(
	x, v []float64, field []Field, acc []uint64, out []int32, done, left int,
) int {
	n := PushDeposit(x[done:], v[done:], field, acc, out[left:])
	for i := range out[left : left+n] {
		out[left+i] += int32(done)
	}
	return left + n
}
