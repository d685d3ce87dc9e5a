package pic

const (
	// MinCells is the smallest grid that has an inside.
	MinCells = 2
	// MaxCells keeps positions well inside the kernels' fixed-point range.
	MaxCells = 1 << 16
	// MaxSpecies bounds the streams and ledgers a step needs.
	MaxSpecies = 64
	// MaxChunks bounds the work that is not spread over particles.
	MaxChunks = 256
)
