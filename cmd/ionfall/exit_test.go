package main

import (
	"encoding/json"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/store"
)

// Goal: wrong command lines end with status 2 and say what is wrong. Method: whole messages.
func TestWrongCommandLines(t *testing.T) {
	dir := folderWith(t, small(2, 1))
	for _, c := range []struct {
		args []string
		want string
	}{
		{nil, "ionfall: no command given, want one of run, check, resume, scan, report, plot, " +
			"view, gas, probe, schema, version; " +
			"for example: ionfall run argon.yaml\n"},
		{[]string{"chekc", "he.yaml"}, "ionfall: unknown command \"chekc\"; did you mean \"check\"?\n"},
		{[]string{"run"}, "ionfall: run: no INPUT file given; for example: ionfall run argon.yaml\n"},
		{[]string{"run", ""}, "ionfall: run: got an empty name, want INPUT file; " +
			"for example: ionfall run argon.yaml\n"},
		{[]string{"check", "a", "b"}, "ionfall: check: got 2 arguments (\"a\", \"b\"), want one, " +
			"INPUT file; for example: ionfall check argon.yaml\n"},
		{[]string{"schema", "x"}, "ionfall: schema: got \"x\", want no arguments\n"},
		{[]string{"resume"}, "ionfall: resume: no results folder DIR given; for example: " +
			"ionfall resume results/argon\n"},
		{[]string{"resume", "nowhere"}, "ionfall: resume: no results: neither nowhere nor " +
			"nowhere.running is there: file does not exist\n"},
		{[]string{"resume", "he.yaml"}, "ionfall: resume: got he.yaml, want the results folder of " +
			"a run: checkpoint.bin is not in it\n"},
		{
			[]string{"run", "he.yaml", "--cores", "two", "--out="},
			"--cores: got \"two\", want a whole number from 1 to 4096\n" +
				"--out: got \"\", want the name of a folder\n",
		},
		{
			[]string{"resume", "x", "--periods", "0", "--accuracy", "0.5", "--cpu", "10 m"},
			"--accuracy: got \"0.5\", want a ratio such as 1 % (units: %, ppm)\n" +
				"--periods: got \"0\", want a whole number from 1 to 1000000000\n" +
				"--cpu: got \"10 m\", want a time such as 10 min (units: s, ms, us, ns, min, h, d); " +
				"m measures a length\n",
		},
		{
			[]string{"run", "hee.yaml"},
			"hee.yaml: no such file under the current folder; did you mean \"he.yaml\"?\n",
		},
	} {
		got := call(t, dir, c.args...)
		if got.status != 2 || got.errOut != c.want || got.out != "" {
			t.Errorf("%q: got status %d, stdout %q, stderr\n%q, want status 2, stderr\n%q",
				c.args, got.status, got.out, got.errOut, c.want)
		}
	}
}

// Goal: a wrong input tells all its errors with their places, with --json as JSON on stderr.
// Method: an input with two, whole output.
func TestWrongInput(t *testing.T) {
	text := strings.Replace(small(2, 1), "50 Pa", "-50 Pa", 1)
	dir := folderWith(t, strings.Replace(text, "title:", "titel:", 1))
	for _, name := range []string{"run", "check"} {
		got := call(t, dir, name, "he.yaml")
		if got.status != 2 || got.out != "" {
			t.Errorf("%s: got status %d, stdout %q", name, got.status, got.out)
		}
		golden(t, "wrong-input.txt", got.errOut)
		got = call(t, dir, name, "he.yaml", "--json")
		if got.status != 2 || got.out != "" {
			t.Errorf("%s --json: got status %d, stdout %q", name, got.status, got.out)
		}
		golden(t, "wrong-input.json", got.errOut)
	}
	got := call(t, dir, "run", "--json", "--nothing")
	want := `{"error":[{"file":"","line":0,"col":0,"key":"","got":"","want":"","hint":"",` +
		`"message":"run: unknown flag --nothing; see: ionfall run --help"}]}` + "\n"
	if got.status != 2 || got.errOut != want {
		t.Errorf("got status %d, %q, want 2, %q", got.status, got.errOut, want)
	}
}

// Goal: a believable run ends with status 0, a table, and a whole folder; with --json stdout is
// summary.json; an existing folder is refused. Method: a real run of about a second.
func TestRunDone(t *testing.T) {
	slow(t)
	dir := folderWith(t, small(200, 100))
	got := call(t, dir, "run", "he.yaml")
	if got.status != 0 {
		t.Fatalf("got status %d, want 0\n%s%s", got.status, got.out, got.errOut)
	}
	contains(t, got.out, "helium, small and quick\n", "grounded (substrate)",
		"ions: mean energy ", " +- ", "results: "+filepath.Join("results", "he")+"\n", caution)
	contains(t, got.errOut, "settling: period 1, ", "\ndone: period 200, ")
	if strings.Contains(got.errOut, "\r") {
		t.Error("a line is redrawn where there is no terminal")
	}
	s, err := store.ReadSummary(filepath.Join(dir, "results", "he", store.SummaryFile))
	if err != nil {
		t.Fatal(err)
	}
	contains(t, got.out, "verdict: "+s.Verdict)

	again := call(t, dir, "run", "he.yaml", "--json", "--cores", "1")
	if again.status != 0 || again.errOut != "" {
		t.Errorf("got status %d, stderr %q, want 0 and nothing", again.status, again.errOut)
	}
	if want := read(t, filepath.Join(dir, "results", "he-2", "summary.json")); again.out != want {
		t.Errorf("got %q, want the summary.json of the second folder", again.out)
	}
	refused := call(t, dir, "run", "he.yaml", "--out", filepath.Join("results", "he"))
	if refused.status != 2 || refused.out != "" {
		t.Errorf("got status %d, stdout %q, want 2", refused.status, refused.out)
	}
	contains(t, refused.errOut, "exists: name another folder, or continue it with: ionfall resume")
	finished := call(t, dir, "resume", filepath.Join("results", "he"))
	if finished.status == 0 {
		t.Errorf("a finished run of fixed length was continued: %q", finished.out)
	}
}

// Goal: a run that is done but not to be believed ends with status 3 and names the reasons.
// Method: one that is averaged from its start, so that ions are not in balance.
func TestRunVerdictFail(t *testing.T) {
	dir := folderWith(t, strings.Replace(small(25, 24), "4.5e14", "4e15", 1))
	got := call(t, dir, "run", "--quiet", "he.yaml", "--out", "mine")
	if got.status != 3 || got.errOut != "" {
		t.Errorf("got status %d, stderr %q, want 3 and nothing", got.status, got.errOut)
	}
	contains(t, got.out, "verdict: fail (", "\n  fail  ", " ion_balance ", "results: mine\n")
	got = call(t, dir, "run", "he.yaml", "--json")
	if got.status != 3 || got.errOut != "" || !json.Valid([]byte(got.out)) {
		t.Errorf("--json: got status %d, stderr %q, stdout %q", got.status, got.errOut, got.out)
	}
}

// Goal: a run that fails while working ends with status 1. Method: a results folder cannot be
// made, because a file has its parent's name.
func TestRunFailed(t *testing.T) {
	dir := folderWith(t, small(2, 1))
	write(t, filepath.Join(dir, "results"), "a file")
	got := call(t, dir, "run", "he.yaml")
	if got.status != 1 || got.out != "" {
		t.Errorf("got status %d, stdout %q, want 1", got.status, got.out)
	}
	contains(t, got.errOut, "ionfall: results folder ")
}

// Goal: check tells what follows, and runs nothing. Method: both forms; the folder stays as it is.
func TestCheck(t *testing.T) {
	dir := folderWith(t, small(2, 1))
	got := call(t, dir, "check", "he.yaml")
	if got.status != 0 || got.errOut != "" {
		t.Errorf("got status %d, stderr %q", got.status, got.errOut)
	}
	contains(t, got.out, "he.yaml: no errors\n", "Debye length", "expected time")
	got = call(t, dir, "check", "he.yaml", "--json")
	var d struct {
		Lines []struct{ Name, Text string }
	}
	if err := json.Unmarshal([]byte(got.out), &d); err != nil || len(d.Lines) == 0 {
		t.Errorf("got %q, %v, want lines as JSON", got.out, err)
	}
	if files, err := filepath.Glob(filepath.Join(dir, "*")); err != nil || len(files) != 1 {
		t.Errorf("got %v, %v, want the input alone", files, err)
	}
}

// Goal: schema and version print what they should. Method: JSON is valid, text is whole.
func TestSchemaAndVersion(t *testing.T) {
	got := call(t, t.TempDir(), "schema")
	if got.status != 0 || got.errOut != "" || !json.Valid([]byte(got.out)) {
		t.Errorf("schema: got status %d, stderr %q, stdout %q", got.status, got.errOut, got.out)
	}
	for _, args := range [][]string{{"version"}, {"--version"}} {
		got = call(t, t.TempDir(), args...)
		contains(t, got.out, "ionfall 1.2.3 (commit abc), go")
	}
	got = call(t, t.TempDir(), "version", "--json")
	var b build
	if err := json.Unmarshal([]byte(got.out), &b); err != nil || b.Version != "1.2.3" ||
		b.Commit != "abc" {
		t.Errorf("got %q, %v", got.out, err)
	}
}
