//go:build !amd64 || purego

package kernels

// native returns no set: there is assembly for amd64 only.
func native() []Set { return nil }
