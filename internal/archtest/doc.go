// Package archtest checks the rules that the whole project follows: which package may import
// which, that no state hides in package variables, the form of the source, and that no file tells
// about the machine it was written on. The tests of this package apply the rules to the module.
//
// The files are parsed, never asked for through the go command: its answers, and those of a
// cached test, can be older than the files. Files of all systems and build tags count.
//
//	m, err := archtest.Load("../..")
//	for _, v := range m.Imports(archtest.Levels()) {
//		t.Error(v) // mcc/model.go:5: imports ionfall/pic of level 3 into ...
//	}
package archtest
