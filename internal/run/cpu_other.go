//go:build !unix

package run

import "time"

// processStart stands in for a clock of processor time where there is none: wall time of one core.
var processStart = time.Now()

// cpuSeconds returns the time since the start of the process [s].
func cpuSeconds() float64 { return time.Since(processStart).Seconds() }
