package mcc

import (
	"math"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

// Background is one component of the neutral gas: uniform, Maxwellian, at rest on average.
type Background struct {
	Gas         *crosssections.Gas
	Density     float64 // number density n [1/m3]
	Temperature float64 // T [K]
}

// thermalSpeed returns sqrt(k T / M) [m/s], the spread of one velocity component.
func (b Background) thermalSpeed() float64 {
	return math.Sqrt(phys.Boltzmann * b.Temperature / b.Gas.Mass)
}
