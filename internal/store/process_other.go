//go:build !linux

package store

// machineID is not known here: the name of the host has to do.
func machineID() string { return "" }

// processStart is not known here: a claim of a process whose number is in use counts by its age.
func processStart(_ int) string { return "" }
