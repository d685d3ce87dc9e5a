package run

import "syscall"

// rusageThread asks for the calling thread alone (getrusage(2)).
const rusageThread = 1

// threadSeconds returns the processor time of the calling thread [s].
func threadSeconds() float64 { return used(rusageThread) }

func used(by int) float64 {
	var u syscall.Rusage
	if err := syscall.Getrusage(by, &u); err != nil {
		return 0
	}
	return float64(u.Utime.Nano()+u.Stime.Nano()) / 1e9
}
