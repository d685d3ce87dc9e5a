package archtest

// Rules say which package of the module may import which.
type Rules struct {
	// Levels of the packages by folder: imports go to a lower level only. Folders below an
	// internal folder of a package belong to that package.
	Levels map[string]int
	// Only names, for an import path and all below it, the packages that may import it.
	Only map[string][]string
	// Pure are the packages that know nothing of files, clocks and logs: they may not import
	// Impure.
	Pure, Impure []string
	// Exempt are folders whose programs make files for the packages and are no part of them.
	Exempt []string
}

// Levels are the rules of this module.
func Levels() Rules {
	return Rules{
		Levels: map[string]int{
			"cmd/ionfall":         7,
			"bench/speed":         7,
			"bench/fastpath":      7,
			"bench/benchmark":     7,
			"bench/validation":    7,
			"bench/scan":          7,
			"examples":            7,
			"internal/scan":       6,
			"internal/run":        5,
			"diagnostics":         4,
			"internal/web":        4,
			"pic":                 3,
			"internal/report":     3,
			"internal/invented":   3,
			"mcc":                 2,
			"internal/store":      2,
			"internal/probe":      2,
			"crosssections":       1,
			"internal/surfaces":   1,
			"internal/surrogate":  1,
			"internal/table":      1,
			"internal/config":     1,
			"internal/validation": 1,
			"internal/phys":       0,
			"internal/rng":        0,
			"internal/kernels":    0,
			"internal/stats":      0,
			"internal/inputerr":   0,
			"internal/bib":        0,
			"internal/progress":   0,
			"internal/codec":      0,
			"internal/archtest":   0,
		},
		Only: map[string][]string{
			"github.com/parquet-go/parquet-go": {"internal/store"},
			"net/http":                         {"internal/web"},
		},
		Pure:   []string{"pic", "mcc", "crosssections", "diagnostics"},
		Impure: []string{"os", "log", "time", "flag"},
		Exempt: []string{"crosssections/internal/gen"},
	}
}
