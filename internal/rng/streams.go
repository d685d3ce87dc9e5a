package rng

// Purpose says what the numbers of a stream decide. The values are part of the format of a
// checkpoint: a number, once used, is never given to another purpose.
type Purpose uint16

const (
	// Loading places the first particles.
	Loading Purpose = 1
	// Collisions picks collision candidates and what becomes of them.
	Collisions Purpose = 2
	// Walls decides reflection and secondary emission.
	Walls Purpose = 3
	// Population picks the particles that are copied or removed to hold their number.
	Population Purpose = 4
	// Swarm follows charged particles in a uniform field.
	Swarm Purpose = 5
	// Refinement moves a state to another grid.
	Refinement Purpose = 6
	// Resampling draws synthetic measurements, and the resampled sweeps of error estimates.
	Resampling Purpose = 40
	// Coulomb pairs electrons and turns their relative velocity.
	Coulomb Purpose = 7
	// Pairs lets charged particles end each other.
	Pairs Purpose = 8
)
