// Package phys holds the physical constants of the project, and nothing else.
//
// Values: CODATA 2018, E. Tiesinga, P. J. Mohr, D. B. Newell and B. N. Taylor,
// Rev. Mod. Phys. 93, 025010 (2021). The first two are exact by the definition of the SI.
package phys

const (
	// ElementaryCharge is e [C], exact.
	ElementaryCharge = 1.602176634e-19
	// Boltzmann is k [J/K], exact.
	Boltzmann = 1.380649e-23
	// ElectronMass is m [kg].
	ElectronMass = 9.1093837015e-31
	// AtomicMass is the unified atomic mass unit u [kg].
	AtomicMass = 1.66053906660e-27
	// Epsilon0 is the vacuum electric permittivity [F/m].
	Epsilon0 = 8.8541878128e-12
)
