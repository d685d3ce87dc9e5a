// Package surfaces holds what electrodes do to the particles that reach them: electrons set free by
// ions, fast atoms and electrons, as published formulas. Energies in eV, angles in rad from the
// normal.
package surfaces
