// Package pic advances a planar capacitive discharge by the electrostatic particle-in-cell
// method: one position, three velocity components (1D3V).
//
// Vocabulary. Node j lies at x = j dx, j = 0..Cells; cell j lies between nodes j and j+1. x = 0
// is the powered electrode, x = Gap the grounded one. A species is split into a fixed number of
// chunks; workers own chunks, never particles. All particles share one weight W, the number of
// real particles per electrode area [1/m2] that each stands for.
//
// Scheme. Step n takes positions from n to n+1 and velocities from n-1/2 to n+1/2 (leapfrog).
// Density by linear weighting, the potential by a tridiagonal solve, the field by one of two
// schemes:
//
//	momentum conserving   field at nodes, (phi[j-1]-phi[j+1])/(2 dx), linear in the cell
//	energy conserving     field constant in the cell, (phi[j]-phi[j+1])/dx
//
// The powered electrode follows a drive or is isolated: circuit.go.
//
// Ions may be sub-cycled: moved once every K electron steps by the field averaged over them.
// The move is made half-way between the two times it joins, so that the density they show in
// between belongs, on average, to the time of the step.
//
// Units inside: positions in cells, velocities in cells per step of the species.
//
// Determinism. Charge sums are integers, random numbers are keyed by step and chunk, other
// sums are taken in chunk order: the result is the same bits for any number of workers.
//
// References: C. K. Birdsall, IEEE Trans. Plasma Sci. 19, 65 (1991); C. K. Birdsall and A. B.
// Langdon, Plasma Physics via Computer Simulation (1985); energy-conserving scheme: H. R.
// Lewis, J. Comput. Phys. 6, 136 (1970); T. Powis and I. D. Kaganovich, Phys. Plasmas 31, 023901
// (2024).
package pic
