package pic

// Observer looks at a run without changing it. Particles and Reduce are called only at steps
// that Due names, by all workers at once: Particles by the owner of the chunk, then, when all
// chunks have been seen, Reduce by every worker. Hits and Events are called at every step by the
// owner of the chunk, Step by one worker. No method may allocate, and what a method accumulates
// must not depend on which worker calls it.
type Observer interface {
	// Due reports whether the particles are wanted at step n: a pure function of n.
	Due(n int64) bool
	// Particles shows a chunk before its kick: x^n, v^(n-1/2).
	Particles(f *Frame, species, chunk int, p Particles)
	// Reduce adds up what Particles collected; worker of workers calls it.
	Reduce(f *Frame, worker, workers int)
	// Hits shows the particles of a chunk that an electrode absorbed in this step.
	Hits(species, chunk int, hits []Hit)
	// Events shows collisions other than elastic scattering of electrons; x are the positions of
	// the chunk's particles.
	Events(n int64, species, chunk int, x []float64, events []Event)
	// Step shows the circuit's view of step n.
	Step(c Circuit)
}

// Event is a collision: which particle of the chunk, by which channel.
type Event struct{ Particle, Channel int32 }

// Particles is a read-only view of a chunk, positions in cells, velocities in cells a move.
type Particles struct{ X, VX, VY, VZ []float64 }

// Frame is a read-only view of the grid at step n. Each worker has its own, equal to the others'.
type Frame struct {
	Step   int64
	Weight float64     // W [1/m2]
	Phi    []float64   // node potential [V]
	E      []float64   // node field [V/m], wall values included
	Number [][]float64 // by species: particles at each node
	// FieldA and FieldD: the field that acts in cell j at fraction s is A[j] + s D[j] [V/m].
	FieldA, FieldD []float64
}

// Circuit is what a meter at the powered electrode sees.
type Circuit struct {
	Step    int64
	Voltage float64 // V at the step [V]
	Current float64 // J into the electrode, mean over the step before [A/m2]
	MidGap  float64 // potential in the middle of the gap [V]
}
