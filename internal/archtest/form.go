package archtest

import (
	"bytes"
	"go/ast"
	"os"
	"path/filepath"
	"strings"
	"unicode/utf8"
)

const (
	// MaxColumns is the longest line of a Go file; a tab counts as one column.
	MaxColumns = 100
	// MaxLines is the longest function, from func to its closing brace.
	MaxLines = 70
)

// Form returns the lines and functions that are too long. Tests and generated files are exempt.
func (m *Module) Form() []Violation {
	var list []Violation
	for _, f := range m.files {
		if f.test || ast.IsGenerated(f.syntax) {
			continue
		}
		for i, line := range bytes.Split(f.source, []byte("\n")) {
			if n := utf8.RuneCount(bytes.TrimRight(line, "\r")); n > MaxColumns {
				list = append(list, on(f, i+1, "line of %d columns, want at most %d",
					n, MaxColumns))
			}
		}
		for _, d := range f.syntax.Decls {
			function, ok := d.(*ast.FuncDecl)
			if !ok {
				continue
			}
			first := m.set.Position(function.Pos()).Line
			n := m.set.Position(function.End()).Line - first + 1
			if n > MaxLines {
				list = append(list, on(f, first, "function %s of %d lines, want at most %d",
					function.Name.Name, n, MaxLines))
			}
		}
	}
	return sorted(list)
}

// Traces returns the lines of any file that hold one of the words: paths and hosts of the machine
// that a file was written on. Binary files are not looked at.
func (m *Module) Traces(words []string) ([]Violation, error) {
	var list []Violation
	for _, name := range m.all {
		content, err := os.ReadFile(filepath.Join(m.dir, filepath.FromSlash(name)))
		if err != nil {
			return nil, err
		}
		if bytes.IndexByte(content, 0) >= 0 {
			continue
		}
		for i, line := range strings.Split(string(content), "\n") {
			for _, word := range words {
				if strings.Contains(strings.ToLower(line), word) {
					list = append(list, Violation{name, i + 1, "holds " + word})
				}
			}
		}
	}
	return sorted(list), nil
}
