package config

import (
	"strings"

	"ionfall/internal/inputerr"
)

// position counts from 1.
type position struct{ line, col int }

// origin is where a Case was read. It is never changed, so copies of a Case share it.
type origin struct {
	file string
	pos  map[string]position
}

// Position is where the value of a key path was written: "numerics.cells",
// "drive.tones.0.frequency", or "gas.mixture.Ar" for the name of a gas. For a key that was left
// out it is the nearest mapping or list around it. Line and column count from 1, and are 0 if the
// Case was not read from a file.
func (c *Case) Position(key string) (file string, line, col int) {
	if c.origin == nil {
		return "", 0, 0
	}
	for {
		if p, ok := c.origin.pos[key]; ok {
			return c.origin.file, p.line, p.col
		}
		if key == "" {
			return c.origin.file, 0, 0
		}
		key = key[:max(0, strings.LastIndexByte(key, '.'))]
	}
}

// Errorf is an error about the value of a key path, placed at its position. It is plain text, no
// format; parts may be empty.
func (c *Case) Errorf(key, got, want, hint string) *inputerr.Error {
	file, line, col := c.Position(key)
	return &inputerr.Error{
		File: file, Line: line, Col: col, Key: key, Got: got, Want: want, Hint: hint,
	}
}
