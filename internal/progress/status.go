package progress

import "time"

// Status is a snapshot of a run, taken after an RF period.
type Status struct {
	Stage     string // pilot, settling, averaging, done
	Periods   int    // made in all
	Particles int64
	// EnergyEV is the mean ion energy at the substrate and its standard error: in the settling
	// stages that of the last period alone, with error NaN.
	EnergyEV, EnergyErrEV float64
	// Flux of ions at the substrate [1/(m2 s)] and its standard error, likewise.
	Flux, FluxErr float64
	Elapsed       time.Duration
	// Remaining is an estimate; negative when there is nothing to base one on yet.
	Remaining time.Duration
	// Event is what has just happened, such as a projection of the density, or "".
	Event string
}
