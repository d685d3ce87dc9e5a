// Package probe reads, reduces and compares measurements made inside a discharge: sweeps of a
// cylindrical Langmuir probe, and retarding-field analysers behind an electrode.
//
// # Words
//
// A sweep is current against the voltage of the tip, electron current positive. The probe is
// repelling for electrons below the plasma potential Vs; U = Vs - V is the retarding voltage and
// chi = U/T the same in units of the electron temperature T [eV]. rho is the tip radius over the
// electron Debye length. The electron energy probability function (EEPF) f is normalised so that
// the integral of sqrt(E) f dE is 1, with E in eV.
//
// # Theory
//
// An isotropic distribution gives a convex tip the retarded electron current
//
//	I_e = (A e n/4) sqrt(2e/m) integral from U of (E - U) f dE
//
// whose second derivative is the EEPF (M. J. Druyvesteyn, Z. Phys. 64, 781 (1930)). Attracted
// particles follow orbital-motion-limited theory (H. M. Mott-Smith and I. Langmuir, Phys. Rev.
// 28, 727 (1926)) where the tip is thin, and a table of the orbital-motion problem (I. B.
// Bernstein and I. N. Rabinowitz, Phys. Fluids 2, 112 (1959); J. G. Laframboise, UTIAS Report 100
// (1966)) where it is not.
//
// # Use
//
//	file, err := probe.ReadSweeps("sweeps.csv", src, probe.Columns{})
//	result, err := probe.Reduce(file.Sweeps, setup, probe.Choices{Seed: 1})
package probe
