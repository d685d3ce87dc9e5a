package scan

// Every cap, and why.

const (
	// maxPoints is some core-years of runs; a plan with more is a slip.
	maxPoints = 20_000
	// maxAxes: a grid of more has at least a thousand points.
	maxAxes = 10
	// maxValues of an axis.
	maxValues = 1000
	// maxPlanBytes and maxListBytes bound what is read of a wrong file.
	maxPlanBytes, maxListBytes = 1 << 20, 16 << 20
)
