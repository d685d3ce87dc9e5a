package pic

const (
	// MinCells is the smallest grid that has an inside.
	MinCells = 2
	// MaxCells keeps positions well inside the kernels' fixed-point range.
	MaxCells = 1 << 16
	// MaxSpecies bounds the streams and ledgers a step needs.
	MaxSpecies = 64
	// MaxAreaRatio is a limit: beyond it nearly all of the gap is far from the powered electrode.
	MaxAreaRatio = 1000
	// MaxChunks bounds the work that is not spread over particles.
	MaxChunks = 256
)
