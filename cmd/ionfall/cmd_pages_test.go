package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/invented"
	"ionfall/internal/store"
)

// pagesFolder holds an invented run, a failed one and a scan.
func pagesFolder(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	for name, verdict := range map[string]string{"a": store.OK, "b": store.Fail} {
		o := invented.Options{Verdict: verdict, Ions: []string{"Ar+"}}
		if err := invented.Run(filepath.Join(dir, name), o); err != nil {
			t.Fatal(err)
		}
	}
	if err := invented.Scan(filepath.Join(dir, "s"), 20, 0); err != nil {
		t.Fatal(err)
	}
	return dir
}

// Goal: reports and plots are written where they belong, never over anything, and slips are told
// in words. Method: every way of calling the commands.
func TestReportAndPlot(t *testing.T) {
	dir := pagesFolder(t)
	for _, c := range []struct {
		args   string
		status int
		says   string // on stderr
		makes  string
	}{
		{"report a", 0, "", "a/report.html"},
		{"report b", 0, "", "b/report.html"},
		{"report s", 0, "", "s/report.html"},
		{"report a b --out both.html", 0, "", "both.html"},
		{"report a b --out both.html", 2, "both.html is there already", ""},
		{"report a b", 2, "want --out FILE", ""},
		{"report a a --out x.html", 2, "a is given twice", ""},
		{"report", 2, "no results folder given", ""},
		{"report none", 2, "neither none nor none.running is there", ""},
		{"plot a ion-energy -o e.svg", 0, "", "e.svg"},
		{"plot a b ion-energy --out e.pdf", 0, "", "e.pdf"},
		{"plot a eepf --out e.png --scale linear", 0, "", "e.png"},
		{"plot a eepf --out e.png", 2, "e.png is there already", ""},
		{"plot a ion-enrgy --out f.svg", 2, `did you mean "ion-energy"`, ""},
		{"plot ion-energy --out f.svg", 2, "want a results folder and a figure", ""},
		{"plot a current --out f.svg", 2, "nothing recorded for it", ""},
		{"plot a b phase-field --out f.svg", 2, "want one", ""},
		{"plot a eepf --out f.gif", 2, "ends in .svg, .pdf or .png", ""},
		{"plot a eepf --out f.svg --width 3", 2, "from 40 to 400", ""},
		{"plot a eepf --out f.svg --scale cubic", 2, "linear or log", ""},
		{"plot a phase-field --out f.svg --measured a/input.yaml", 2, "cannot be laid over", ""},
		{"plot a eepf --out f.svg --measured a/input.yaml", 2, "input.yaml:2:1", ""},
		{"view none", 2, "none", ""},
		{"view a --port 70000", 2, "from 1 to 65535", ""},
		{"view a --allow-runs", 2, "view the folder that it is in", ""},
		{"view a/input.yaml", 2, "is a file", ""},
	} {
		got := call(t, dir, strings.Fields(c.args)...)
		if got.status != c.status || !strings.Contains(got.errOut, c.says) {
			t.Errorf("%s: status %d, %q; want %d, %q", c.args, got.status, got.errOut, c.status, c.says)
		}
		if c.makes == "" {
			continue
		}
		if info, err := os.Stat(filepath.Join(dir, c.makes)); err != nil || info.Size() < 2000 {
			t.Errorf("%s: %v", c.args, err)
		}
	}
	page, err := os.ReadFile(filepath.Join(dir, "b", "report.html"))
	if err != nil || !bytes.Contains(page, []byte("Not to be used")) {
		t.Errorf("the report of a failed run: %v", err)
	}
}

// Goal: the viewer starts no run over another and none with a wrong input. Method: a launcher with
// this test's own folder; nothing is really started.
func TestLauncherRefuses(t *testing.T) {
	dir := pagesFolder(t)
	l, err := newLauncher(dir)
	if err != nil {
		t.Fatal(err)
	}
	if err := l.Check([]byte("gap: 4\n")); err == nil || !strings.Contains(err.Error(), ":1:6: gap") {
		t.Errorf("wrong input: %v", err)
	}
	plan := []byte("base: case.yaml\nvary: {gap: [2 cm, 3]}\n")
	if err := l.Check(plan); err == nil || !strings.Contains(err.Error(), "case.yaml: no such") {
		t.Errorf("wrong plan: %v", err)
	}
	if left, err := filepath.Glob(filepath.Join(dir, ".plan-*")); err != nil || len(left) > 0 {
		t.Errorf("left behind: %v, %v", left, err)
	}
	if err := l.Start([]byte("x"), "a"); err == nil || !strings.Contains(err.Error(), "already") {
		t.Errorf("existing results: %v", err)
	}
	if err := os.WriteFile(filepath.Join(dir, "c.yaml"), []byte("mine"), 0o600); err != nil {
		t.Fatal(err)
	}
	if err := l.Start([]byte("x"), "c"); err == nil || !strings.Contains(err.Error(), "already") {
		t.Errorf("existing input: %v", err)
	}
	if kept, err := os.ReadFile(filepath.Join(dir, "c.yaml")); err != nil || string(kept) != "mine" {
		t.Errorf("the user's file: %q, %v", kept, err)
	}
	if l.busy.Load() {
		t.Error("the launcher believes that something runs")
	}
}
