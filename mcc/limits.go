package mcc

const (
	// tableRows is the number of steps in speed of the collision-frequency tables. At 1000 eV it
	// gives 0.03 eV between rows at argon's ionization threshold.
	tableRows = 8192
	// fastestTarget is the speed up to which targets are allowed for, in thermal speeds of one
	// component: faster is one in 1e8.
	fastestTarget = 6.5
	// maxCandidates is the largest mean number of candidates a particle and step. More would mean
	// that free flight between collisions is not resolved at all.
	maxCandidates = 2.0
)
