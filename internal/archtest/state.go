package archtest

import (
	"errors"
	"go/ast"
	"go/token"
	"go/types"
	"slices"
	"strings"
)

// State returns the places where package variables could change after the start: assignments and
// addresses of them in functions, methods on them that change their receiver, variables made for
// changing (of packages sync and sync/atomic), and init functions. A slice or map that is handed
// out and changed elsewhere is not seen. Tests are exempt.
func (m *Module) State() []Violation {
	packages := map[string][]*file{}
	for _, f := range m.files {
		if !f.test {
			packages[f.folder] = append(packages[f.folder], f)
		}
	}
	var list []Violation
	for folder, files := range packages {
		list = append(list, m.stateOf(folder, files)...)
	}
	return sorted(list)
}

// none is an importer that knows no package: names of the package itself still find their
// declarations, and no other package need be read.
type none struct{}

// Import implements types.Importer.
func (none) Import(string) (*types.Package, error) { return nil, errors.New("not read") }

func (m *Module) stateOf(folder string, files []*file) []Violation {
	w := &watcher{module: m, info: &types.Info{
		Uses: map[*ast.Ident]types.Object{}, Defs: map[*ast.Ident]types.Object{},
		Types: map[ast.Expr]types.TypeAndValue{}, Selections: map[*ast.SelectorExpr]*types.Selection{},
	}}
	var syntax []*ast.File
	for _, f := range files {
		syntax = append(syntax, f.syntax)
	}
	check := types.Config{Importer: none{}, Error: func(error) {}, FakeImportC: true}
	// Errors are expected: imports are unknown, and files for other systems declare names again.
	_, _ = check.Check(folder, m.set, syntax, w.info)
	for _, f := range syntax {
		for _, d := range f.Decls {
			w.declaration(d)
		}
	}
	return w.list
}

// watcher looks for changes of package variables.
type watcher struct {
	module *Module
	info   *types.Info
	list   []Violation
}

func (w *watcher) fail(at ast.Node, format string, args ...any) {
	w.list = append(w.list, w.module.at(at.Pos(), format, args...))
}

func (w *watcher) declaration(d ast.Decl) {
	switch d := d.(type) {
	case *ast.FuncDecl:
		if d.Recv == nil && d.Name.Name == "init" {
			w.fail(d, "init function: nothing registers itself")
		}
		if d.Body != nil {
			ast.Inspect(d.Body, w.visit)
		}
	case *ast.GenDecl:
		if d.Tok != token.VAR {
			return
		}
		for _, spec := range d.Specs {
			w.variables(spec.(*ast.ValueSpec))
		}
	}
}

// variables looks at a declaration of package variables: its type, and functions in its value.
func (w *watcher) variables(spec *ast.ValueSpec) {
	types := []ast.Expr{spec.Type}
	for _, v := range spec.Values {
		if literal, ok := v.(*ast.CompositeLit); ok {
			types = append(types, literal.Type)
		}
		ast.Inspect(v, func(n ast.Node) bool {
			if f, ok := n.(*ast.FuncLit); ok {
				ast.Inspect(f.Body, w.visit)
				return false
			}
			return true
		})
	}
	for _, t := range types {
		if index, ok := t.(*ast.IndexExpr); ok {
			t = index.X // atomic.Pointer[T]
		}
		selector, ok := t.(*ast.SelectorExpr)
		if !ok {
			continue
		}
		if p := w.imported(selector); p == "sync" || p == "sync/atomic" {
			w.fail(spec, "package variable %s is made for changing", spec.Names[0].Name)
		}
	}
}

// visit looks at a part of a function.
func (w *watcher) visit(n ast.Node) bool {
	switch n := n.(type) {
	case *ast.AssignStmt:
		if n.Tok != token.DEFINE {
			for _, target := range n.Lhs {
				w.changes(target, "assigned to")
			}
		}
	case *ast.IncDecStmt:
		w.changes(n.X, "assigned to")
	case *ast.RangeStmt:
		if n.Tok == token.ASSIGN {
			w.changes(n.Key, "assigned to")
			w.changes(n.Value, "assigned to")
		}
	case *ast.UnaryExpr:
		if n.Op == token.AND {
			w.changes(n.X, "handed out by its address")
		}
	case *ast.CallExpr:
		w.call(n)
	}
	return true
}

// call finds changes by built-in functions and by methods.
func (w *watcher) call(c *ast.CallExpr) {
	switch f := ast.Unparen(c.Fun).(type) {
	case *ast.Ident:
		_, builtin := w.info.Uses[f].(*types.Builtin)
		if builtin && slices.Contains([]string{"copy", "delete", "clear"}, f.Name) && len(c.Args) > 0 {
			w.changes(c.Args[0], "changed by "+f.Name)
		}
	case *ast.SelectorExpr:
		s := w.info.Selections[f]
		if s == nil || s.Kind() != types.MethodVal {
			return
		}
		signature, ok := s.Obj().Type().(*types.Signature)
		if !ok || signature.Recv() == nil {
			return
		}
		if _, pointer := signature.Recv().Type().(*types.Pointer); pointer {
			w.changes(f.X, "handed to method "+f.Sel.Name+", which may change it,")
		}
	}
}

// changes reports a place in memory that is, or is part of, a package variable.
func (w *watcher) changes(place ast.Expr, how string) {
	switch e := place.(type) {
	case *ast.ParenExpr:
		w.changes(e.X, how)
	case *ast.IndexExpr:
		w.changes(e.X, how)
	case *ast.SliceExpr:
		w.changes(e.X, how)
	case *ast.StarExpr:
		w.changes(e.X, how)
	case *ast.SelectorExpr:
		if p := w.imported(e); p != "" {
			w.fail(e, "variable %s of package %s is %s", e.Sel.Name, p, how)
			return
		}
		w.changes(e.X, how)
	case *ast.Ident:
		v, ok := w.info.Uses[e].(*types.Var)
		if ok && v.Pkg() != nil && v.Parent() == v.Pkg().Scope() {
			w.fail(e, "package variable %s is %s", e.Name, how)
		}
	}
}

// imported is the import path if the selector names something of another package, or "".
func (w *watcher) imported(s *ast.SelectorExpr) string {
	id, ok := s.X.(*ast.Ident)
	if !ok {
		return ""
	}
	p, ok := w.info.Uses[id].(*types.PkgName)
	if !ok {
		return ""
	}
	return strings.Trim(p.Imported().Path(), `"`)
}
