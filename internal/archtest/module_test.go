package archtest

import (
	"testing"
)

func load(t *testing.T, dir string) *Module {
	t.Helper()
	m, err := Load(dir)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

func report(t *testing.T, list []Violation) {
	t.Helper()
	for _, v := range list {
		t.Error(v)
	}
}

// The tests of the module itself. Each rule is tried out in rules_test.go on a module that breaks
// it.

func TestImports(t *testing.T) { report(t, load(t, "../..").Imports(Levels())) }

func TestState(t *testing.T) { report(t, load(t, "../..").State()) }

func TestForm(t *testing.T) { report(t, load(t, "../..").Form()) }

func TestTraces(t *testing.T) {
	list, err := load(t, "../..").Traces(traces())
	if err != nil {
		t.Fatal(err)
	}
	report(t, list)
}

// Goal: the tests above look at the module and not past it. Method: files known to be in it.
func TestLoadFindsTheModule(t *testing.T) {
	m := load(t, "../..")
	found := map[string]bool{}
	for _, f := range m.files {
		found[f.name] = true
	}
	if m.Path != "ionfall" || !found["pic/simulation.go"] || !found["internal/archtest/doc.go"] {
		t.Errorf("module %q with %d files, want ionfall with its sources", m.Path, len(m.files))
	}
}

// traces are the words, put together here so that this file does not hold them.
func traces() []string {
	const slash = "/"
	list := []string{
		slash + "work" + slash, slash + "root" + slash, slash + "home" + slash,
		"shared" + slash + "design", "shared" + slash + "style",
	}
	for _, host := range []string{"proxy", "sum"} {
		list = append(list, host+".golang")
	}
	return append(list, "go"+"proxy", "registry"+".npmjs", "pypi"+".org")
}
