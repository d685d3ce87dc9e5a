package run

// The stages of a run.
const (
	StagePilot     = "pilot"
	StageSettling  = "settling"
	StageAveraging = "averaging"
	StageDone      = "done"
)

// control is what decides about the course of a run; with the particles and the sums it is the
// whole state. It is saved as JSON, which keeps every bit of a float64.
type control struct {
	Stage    string
	Numerics Numerics // in use
	Reasons  []string // for the final numerics

	Periods      int   // made in all
	SimPeriods   int   // made by the present simulation
	StagePeriods int   // made in the present stage
	Moved        int64 // particle moves in all

	Target    int       // number of electrons to be held within its band
	Kinetic   []float64 // of each species at the end of the last period [J/m2]
	Field     float64   // [J/m2]
	Event     string    // what the history's next row is to tell
	Residence float64   // of an ion in the gap [periods]
	Transit   float64   // of an ion through the sheath [periods]

	Round      round
	Negative   []negativeCount // by species
	Projecting bool            // the density is still projected ahead
	Window     int             // periods of undisturbed settling
	Restarts   int
	Averaged   accountTotals
	Reactor    reactorControl
	Reached    bool // the asked-for errors
	Spent      bool // the budget

	// of earlier processes, for the provenance
	CPU, Wall float64
}

// round is a stretch of periods over which the growth of the density is measured.
type round struct {
	Number  int
	Periods int     // made
	Length  int     // to make
	Last    bool    // of the greatest length: without growth, the last one
	Content float64 // ions at its start [1/m2]
	Doubled int     // times that the length was doubled
}

// accountTotals sums the ledgers of the averaging stage.
type accountTotals struct {
	Periods    int
	Electric   float64   // [J/m2]
	FieldFrom  float64   // [J/m2]
	FieldTo    float64   // [J/m2]
	Work       []float64 // by species: energy taken from the field [J/m2]
	Born       float64   // ions [1/m2]
	Lost       float64   // ions [1/m2]
	Collisions []float64 // by species
	Moves      []float64 // by species
	Beyond     float64
	AllCollide float64
}

// Row is one RF period of the history.
type Row struct {
	Stage       string
	Weight      float64 // [1/m2]
	Electrons   int64
	Ions        int64      // positive
	Flux        [2]float64 // of ions by wall [1/(m2 s)]
	Energy      [2]float64 // mean of ions by wall [eV]
	Power       []float64  // by species [W/m2]
	TotalPower  float64    // [W/m2]
	GasHeating  float64    // by ions and fast neutrals [W/m2]
	Content     float64    // positive less negative ions in the gap [1/m2]
	Event       string
	FieldEnergy float64 // [J/m2]
}
