package archtest

import (
	"slices"
	"strconv"
	"strings"
)

// Imports returns the imports that break the rules, and the packages that have no level. Tests
// may import what they like.
func (m *Module) Imports(r Rules) []Violation {
	var list []Violation
	unknown := map[string]bool{}
	for _, f := range m.files {
		if f.test || slices.Contains(r.Exempt, f.folder) {
			continue
		}
		owner := r.owner(f.folder)
		if owner == "" {
			if !unknown[f.folder] {
				list = append(list, m.at(f.syntax.Package,
					"package %s has no level: give it one in the table", f.folder))
			}
			unknown[f.folder] = true
			continue
		}
		for _, spec := range f.syntax.Imports {
			name, err := strconv.Unquote(spec.Path.Value)
			if err != nil {
				panic("archtest: the parser took a wrong import: " + err.Error())
			}
			if text := r.judge(m.Path, owner, name); text != "" {
				list = append(list, m.at(spec.Pos(), "%s", text))
			}
		}
	}
	return sorted(list)
}

// owner is the folder with a level that a folder belongs to, or "".
func (r Rules) owner(folder string) string {
	if _, ok := r.Levels[folder]; ok {
		return folder
	}
	if outer, _, ok := strings.Cut(folder, "/internal/"); ok {
		return r.owner(outer)
	}
	return ""
}

// judge says what is wrong with an import in the package owner, or "".
func (r Rules) judge(module, owner, name string) string {
	for restricted, allowed := range r.Only {
		if within(name, restricted) && !slices.Contains(allowed, owner) {
			return "imports " + name + ": only " + strings.Join(allowed, ", ") + " may"
		}
	}
	if slices.Contains(r.Pure, owner) {
		for _, impure := range r.Impure {
			if within(name, impure) {
				return "imports " + name + ": " + strings.Join(r.Pure, ", ") +
					" know nothing of files, clocks, logs and command lines"
			}
		}
	}
	folder, ok := strings.CutPrefix(name, module+"/")
	if !ok {
		return ""
	}
	target := r.owner(folder)
	switch {
	case target == owner:
		return ""
	case target == "":
		return "imports " + name + ", which has no level: give it one in the table"
	case r.Levels[target] >= r.Levels[owner]:
		return "imports " + name + " of level " + strconv.Itoa(r.Levels[target]) + " into " +
			owner + " of level " + strconv.Itoa(r.Levels[owner]) + ", want a lower level"
	}
	return ""
}

// within tells whether an import path is another one or below it.
func within(name, outer string) bool {
	return name == outer || strings.HasPrefix(name, outer+"/")
}
