package main

import (
	"strings"
	"testing"
	"unicode/utf8"
)

// Goal: the help of every command is what was last agreed on, lists the exit statuses and fits
// 100 columns. Method: golden files.
func TestHelp(t *testing.T) {
	app := newProgram(nil, nil).app()
	list := append([]string{"ionfall"}, names(app.Commands)...)
	for _, group := range []string{"gas", "probe", "scan"} {
		for _, name := range names(find(app.Commands, group).Subcommands) {
			list = append(list, group+" "+name)
		}
	}
	for _, name := range list {
		args := append(strings.Fields(name), "--help")
		if name == "ionfall" {
			args = args[1:]
		}
		got := call(t, t.TempDir(), args...)
		if got.status != 0 || got.errOut != "" {
			t.Errorf("%s: got status %d and %q on stderr", name, got.status, got.errOut)
		}
		golden(t, "help-"+strings.ReplaceAll(name, " ", "-")+".txt", got.out)
		contains(t, got.out, statusHelp)
		for line := range strings.Lines(got.out) {
			if n := utf8.RuneCountInString(strings.TrimRight(line, "\n")); n > 100 {
				t.Errorf("%s: a line of %d columns: %s", name, n, line)
			}
		}
	}
}
