package kernels

import (
	"fmt"
	"slices"
	"strings"
)

// Set is one form of the kernels that exist in several forms, which agree in every bit.
type Set struct {
	// Name is "portable", or the instructions that the set is made of: "avx2", "avx512".
	Name string
	// PushDeposit is as the function of this name.
	PushDeposit func(x, v []float64, field []Field, acc []uint64, out []int32) int
	// AddMoments is as the function of this name.
	AddMoments func(
		x, vx, vy, vz []float64, field []Field, sums []Moments, energy []float64,
	) int
}

// sets are those that this processor can run, the fastest last.
var sets = append([]Set{{"portable", PushDeposit, AddMoments}}, native()...)

// Best returns the fastest set that this processor can run.
func Best() Set { return sets[len(sets)-1] }

// Available returns the names of the sets that this processor can run, the fastest last.
func Available() []string {
	var names []string
	for _, s := range sets {
		names = append(names, s.Name)
	}
	return names
}

// Select returns the set of the given name; the best one for the name "".
func Select(name string) (Set, error) {
	if name == "" {
		return Best(), nil
	}
	i := slices.IndexFunc(sets, func(s Set) bool { return s.Name == name })
	if i < 0 {
		return Set{}, fmt.Errorf("kernels: got %q, want one that works here: %s",
			name, strings.Join(Available(), ", "))
	}
	return sets[i], nil
}
