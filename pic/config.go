package pic

import (
	"fmt"

	"ionfall/internal/kernels"
	"ionfall/internal/surfaces"
)

// Scheme is how the field acts on a particle within its cell.
type Scheme int

const (
	// MomentumConserving takes the field at nodes, linear in the cell.
	MomentumConserving Scheme = iota
	// EnergyConserving takes the field constant in the cell (Lewis 1970).
	EnergyConserving
)

func (s Scheme) String() string {
	return [...]string{"momentum_conserving", "energy_conserving"}[s]
}

// Electrode says what a wall does to the particles that reach it.
type Electrode struct {
	IonSecondaryYield float64 // electrons emitted per ion
	// Yields, by species, go before IonSecondaryYield where they are not nil.
	Yields             []surfaces.Yield
	SecondaryEnergyEV  float64 // of an emitted electron [eV]
	ElectronReflection float64 // probability of specular reflection
	// Emission by electrons, of those that ElectronReflection lets through; nil for none.
	Emission *surfaces.Emission
}

// Config describes a discharge and its numerics. Species[0] must be the electrons, if any.
type Config struct {
	Geometry       Geometry
	Gap            float64 // [m]
	Cells          int
	Period         float64 // of the fundamental [s]
	StepsPerPeriod int
	Scheme         Scheme
	Drive          Drive
	// CurrentDrive takes the Drive for a current density [A/m2] instead of a voltage.
	CurrentDrive bool
	// Network connects a voltage Drive with the powered electrode: see circuit.go.
	Network Network
	// TopVoltage is the largest voltage that tables are made for [V]; New fills it in.
	TopVoltage float64
	// Isolated leaves the powered electrode unconnected: see circuit.go. It has no Drive then.
	Isolated   bool
	Electrodes [2]Electrode // by Wall
	Species    []Species
	Relaxation Relaxation
	// Pairs react once every PairEvery steps, a multiple of all species' sub-cycling.
	Pairs     []PairReaction
	PairEvery int
	Weight    float64 // W [1/m2]
	Chunks    int
	Seed      uint64
	// Kernels is the set of hot loops to use; the zero value is the fastest that works here. All
	// give the same bits.
	Kernels kernels.Set
}

// CellSize returns dx [m].
func (c *Config) CellSize() float64 { return c.Gap / float64(c.Cells) }

// TimeStep returns dt [s].
func (c *Config) TimeStep() float64 { return c.Period / float64(c.StepsPerPeriod) }

// VelocityUnit returns one cell per move of a species with sub-cycling K [m/s].
func (c *Config) VelocityUnit(every int) float64 {
	return c.CellSize() / (c.TimeStep() * float64(every))
}

func (c *Config) check() error {
	switch {
	case c.Cells < MinCells || c.Cells > MaxCells:
		return fmt.Errorf("pic: %d cells, want %d to %d", c.Cells, MinCells, MaxCells)
	case c.StepsPerPeriod < 1:
		return fmt.Errorf("pic: %d steps a period, want at least 1", c.StepsPerPeriod)
	case !(c.Gap > 0 && c.Period > 0 && c.Weight > 0):
		return fmt.Errorf("pic: gap %g m, period %g s and weight %g /m2 must be positive",
			c.Gap, c.Period, c.Weight)
	case c.Chunks < 1 || c.Chunks > MaxChunks:
		return fmt.Errorf("pic: %d chunks, want 1 to %d", c.Chunks, MaxChunks)
	case len(c.Species) < 1 || len(c.Species) > MaxSpecies:
		return fmt.Errorf("pic: %d species, want 1 to %d", len(c.Species), MaxSpecies)
	}
	if r := c.Relaxation; r.Pairs != nil && (r.Every < 1 || c.StepsPerPeriod%r.Every != 0) {
		return fmt.Errorf("pic: electrons collide with each other every %d steps, which does not "+
			"divide the %d of a period", r.Every, c.StepsPerPeriod)
	}
	if err := c.Geometry.check(); err != nil {
		return err
	}
	if err := c.checkCircuit(); err != nil {
		return err
	}
	if err := c.checkPairs(); err != nil {
		return err
	}
	for i, sp := range c.Species {
		if !(sp.Mass > 0) {
			return fmt.Errorf("pic: %s has the mass %g kg", sp.Name, sp.Mass)
		}
		if i > 0 && sp.Charge < 0 && sp.Collisions != nil && sp.Name == "e" {
			return fmt.Errorf("pic: the electrons must be the first species")
		}
		if sp.Every < 1 || c.StepsPerPeriod%sp.Every != 0 {
			return fmt.Errorf("pic: %s moves every %d steps, which does not divide the %d of a period",
				sp.Name, sp.Every, c.StepsPerPeriod)
		}
	}
	return nil
}
