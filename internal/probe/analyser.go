package probe

// Analyser is a planar retarding-field analyser behind an electrode.
type Analyser struct {
	// Grids before the collector, each with the open part Open of its area.
	Grids int
	Open  float64
	// Radius of the entrance [m]; 0 is not known, and then no flux is stated.
	Radius float64
	// Acceptance is the largest angle to the axis that passes [rad].
	Acceptance float64
	// Resolution is the full width at half maximum of what a single energy becomes [eV].
	Resolution float64
	// Potential of the electrode, with which retarding voltages are compared [V].
	Potential float64
}
