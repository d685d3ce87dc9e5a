package probe

// Sweep is one run through the voltages, in the order measured.
type Sweep struct {
	// Name tells it from others: the number in the file.
	Name string
	// Voltage of the tip [V].
	Voltage []float64
	// Current, electron current positive [A].
	Current []float64
	// Up says that the voltage rises with time.
	Up bool
}

// File is what was read from a file of sweeps.
type File struct {
	Name   string
	Sweeps []Sweep
	// Notes say what was detected and assumed, for people.
	Notes []string
}

// Columns names the columns of a file and their units; what is "" is found from the header.
type Columns struct {
	Voltage, Current, Sweep  string
	VoltageUnit, CurrentUnit string
	Sign                     string // SignAuto, SignElectron or SignIon
}

// What a positive current in the file is.
const (
	SignAuto     = "auto"
	SignElectron = "electron"
	SignIon      = "ion"
)

const (
	// MaxFileBytes bounds a file of sweeps.
	MaxFileBytes = 64 << 20
	// MinPoints of a sweep: a second derivative needs a window of points on each side.
	MinPoints = 30
	// MaxPoints of all sweeps of a file.
	MaxPoints = 2_000_000
)
