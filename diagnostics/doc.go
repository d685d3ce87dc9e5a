// Package diagnostics measures a running discharge: what hits the electrodes, profiles on x and on
// x and RF phase, electron energies by region, and the circuit's waveforms.
//
// A Recorder observes a pic.Simulation and never changes it. Impacts, ionizations and the circuit
// are counted at every step; the particles are sampled every Stride steps, a stride without
// common factor with the steps of a period, so that over Stride periods every step of the
// period is sampled equally often and phases are not biased.
//
// Averages are taken by batches of whole RF periods; every average comes with the standard error
// that the scatter of the batches gives.
package diagnostics
