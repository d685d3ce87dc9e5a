package main

import "fmt"

// benchmarkCase is a set of conditions and numerics of the published comparison of five
// independent codes, and its result.
//
// Ref: M. M. Turner, A. Derzsi, Z. Donko, D. Eremin, S. J. Kelly, T. Lafleur and T. Mussenbrock,
// Phys. Plasmas 20, 013507 (2013), doi:10.1063/1.4775084. The figures are from memory; they are
// consistent with each other (steps = periods x steps a period) and were not compared with the
// printed table.
type benchmarkCase struct {
	Number         int
	GasDensity     float64 // [1/m3]
	Voltage        float64 // amplitude [V]
	Periods        int
	Density        float64 // of the start [1/m3]
	PerCell        int     // particles of each species at the start
	Cells          int
	StepsPerPeriod int
	Published      float64 // ion density in mid-plane [1/m3]
}

// Conditions and rules that the cases share.
const (
	gap                 = 0.067    // [m]
	frequency           = 13.56e6  // [Hz]
	gasTemperature      = 300.0    // [K], of the ions at the start, too
	electronTemperature = 30_000.0 // at the start [K]
	electronMass        = 9.109e-31
	heliumMass          = 6.67e-27 // of atom and ion [kg]
	averagedPeriods     = 32       // the last ones of a run
)

func published() []benchmarkCase {
	return []benchmarkCase{
		{1, 9.64e20, 450, 1280, 2.56e14, 512, 128, 400, 0.140e15},
		{2, 32.1e20, 200, 5120, 5.12e14, 256, 256, 800, 0.828e15},
		{3, 96.4e20, 150, 5120, 5.12e14, 128, 512, 1600, 1.81e15},
		{4, 321e20, 120, 15360, 3.84e14, 64, 512, 3200, 2.57e15},
	}
}

func findCase(number int) (benchmarkCase, error) {
	for _, c := range published() {
		if c.Number == number {
			return c, nil
		}
	}
	return benchmarkCase{}, fmt.Errorf("--case: got %d, want 1 to %d", number, len(published()))
}

// weight returns the real particles per area that a simulated one stands for [1/m2]: that of the
// published start, whatever density a run starts from.
func (c *benchmarkCase) weight() float64 {
	return c.Density * gap / float64(c.Cells*c.PerCell)
}
