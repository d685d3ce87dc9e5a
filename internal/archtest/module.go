package archtest

import (
	"bufio"
	"cmp"
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"
)

// Violation is a place where a rule is broken.
type Violation struct {
	// File is relative to the top of the module, with slashes.
	File string
	Line int
	Text string
}

// String is "file:line: text".
func (v Violation) String() string { return fmt.Sprintf("%s:%d: %s", v.File, v.Line, v.Text) }

// Module is the parsed source of a module, and the names of all its files.
type Module struct {
	// Path is the import path of the module.
	Path string

	dir   string
	set   *token.FileSet
	files []*file
	all   []string // every file of the project, relative, with slashes
}

// file is one Go file.
type file struct {
	name   string // relative, with slashes
	folder string // of the package: "." is the top
	test   bool
	syntax *ast.File
	source []byte
}

// Load parses the module whose go.mod is in dir.
func Load(dir string) (*Module, error) {
	m := &Module{dir: dir, set: token.NewFileSet()}
	if err := m.readPath(); err != nil {
		return nil, err
	}
	err := filepath.WalkDir(dir, func(p string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		if d.IsDir() {
			if p != dir && m.foreign(p, d.Name()) {
				return fs.SkipDir
			}
			return nil
		}
		if !d.Type().IsRegular() {
			return nil
		}
		return m.add(p)
	})
	if err != nil {
		return nil, err
	}
	return m, nil
}

// foreign tells the folders that are no source of this module: hidden ones, what other tools put
// there, results of runs, and modules of their own.
func (m *Module) foreign(p, name string) bool {
	if strings.HasPrefix(name, ".") || name == "node_modules" || name == "vendor" ||
		name == "results" && filepath.Dir(p) == filepath.Clean(m.dir) ||
		strings.HasSuffix(name, ".running") {
		return true
	}
	_, err := os.Stat(filepath.Join(p, "go.mod"))
	return err == nil
}

func (m *Module) readPath() error {
	f, err := os.Open(filepath.Join(m.dir, "go.mod"))
	if err != nil {
		return err
	}
	defer func() { _ = f.Close() }() // nothing was written
	for s := bufio.NewScanner(f); s.Scan(); {
		if name, ok := strings.CutPrefix(s.Text(), "module "); ok {
			m.Path = strings.TrimSpace(name)
			return nil
		}
	}
	return fmt.Errorf("%s: no module line", f.Name())
}

func (m *Module) add(p string) error {
	relative, err := filepath.Rel(m.dir, p)
	if err != nil {
		return err
	}
	name := filepath.ToSlash(relative)
	m.all = append(m.all, name)
	if path.Ext(name) != ".go" || strings.Contains("/"+name, "/testdata/") {
		return nil
	}
	source, err := os.ReadFile(p)
	if err != nil {
		return err
	}
	syntax, err := parser.ParseFile(m.set, name, source,
		parser.ParseComments|parser.SkipObjectResolution)
	if err != nil {
		return err
	}
	m.files = append(m.files, &file{
		name: name, folder: path.Dir(name), test: strings.HasSuffix(name, "_test.go"),
		syntax: syntax, source: source,
	})
	return nil
}

// at makes a violation at a position of the syntax.
func (m *Module) at(pos token.Pos, format string, args ...any) Violation {
	p := m.set.Position(pos)
	return Violation{p.Filename, p.Line, fmt.Sprintf(format, args...)}
}

// on makes a violation at a line of a file.
func on(f *file, line int, format string, args ...any) Violation {
	return Violation{f.name, line, fmt.Sprintf(format, args...)}
}

// sorted brings violations into the order of files and lines.
func sorted(list []Violation) []Violation {
	slices.SortStableFunc(list, func(a, b Violation) int {
		return cmp.Or(cmp.Compare(a.File, b.File), cmp.Compare(a.Line, b.Line))
	})
	return list
}
