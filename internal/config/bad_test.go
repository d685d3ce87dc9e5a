package config

import (
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"testing"
	"time"

	"ionfall/internal/inputerr"
)

const badDir = "../../testdata/bad"

// badInput is a file of testdata/bad.
type badInput struct {
	name string
	// schema says that the JSON Schema sees the mistake too.
	schema bool
}

func badInputs() []badInput {
	return []badInput{
		{"wrong-unit", true},
		{"unit-of-another-dimension", true},
		{"unknown-unit", true},
		{"ambiguous-unit-case", true},
		{"bare-number", true},
		{"decimal-comma", true},
		{"negative-pressure", true},
		{"zero-pressure", false},
		{"pressure-too-high", false},
		{"not-a-number", true},
		{"infinite", true},
		{"hex-number", true},
		{"number-too-large", false},
		{"frequency-zero", false},
		{"no-amplitude", false},
		{"no-tones", true},
		{"too-many-tones", true},
		{"no-fundamental", false},
		{"one-cell", true},
		{"bad-numerics", false},
		{"average-without-periods", false},
		{"bad-fast-neutrals", true},
		{"bad-scattering", true},
		{"bad-scheme", true},
		{"bad-sharing", true},
		{"fast-neutrals-too-slow", false},
		{"not-whole", true},
		{"number-in-quotes", true},
		{"unknown-key", true},
		{"unknown-key-elsewhere", true},
		{"missing-keys", true},
		{"several-errors", true},
		{"more-than-twenty-errors", true},
		{"bad-sum", false},
		{"bad-fraction", true},
		{"bad-gas-name", true},
		{"bad-library", true},
		{"no-substrate", false},
		{"list-instead-of-mapping", true},
		{"nothing", true},
		{"area-ratio", true},
		{"area-ratio-of-plates", false},
		{"no-capacitor", false},
		{"total-without-area", false},
		{"voltage-and-power", false},
		{"two-targets", false},
		{"no-waveform", false},
		{"two-waveforms", false},
		{"bad-series", false},
		{"current-and-voltage", false},
		{"bias-behind-capacitor", false},
		{"self-bias-without-capacitor", false},
		{"limit-without-target", false},
		{"bad-surfaces", true},
		{"bad-pulse", false},
		{"too-much-reflection", false},
	}
}

// badYAML are files whose mistake is not one of the data: no reader of YAML gets as far as a
// schema, or a schema cannot see it.
func badYAML() []string {
	return []string{
		"duplicate-key", "syntax", "syntax-colon", "syntax-tab", "alias", "tag", "two-documents",
		"complex-key", "empty", "not-utf8", "utf16", "nul",
	}
}

// message is the whole text that Load gives for a file of the current folder.
func message(t *testing.T, name string) string {
	t.Helper()
	c, _, err := Load(name)
	if err == nil || c != nil {
		t.Fatalf("%s: got a case, want an error", name)
	}
	var list inputerr.List
	if !errors.As(err, &list) {
		t.Errorf("%s: error of type %T, want inputerr.List", name, err)
	}
	return err.Error() + "\n"
}

// Goal: every kind of mistake gives its whole, right message, at the right place, and does not
// name the folder. Method: golden files, read from within the folder.
func TestBadFiles(t *testing.T) {
	names := badYAML()
	for _, b := range badInputs() {
		names = append(names, b.name)
	}
	t.Chdir(badDir)
	for _, name := range names {
		t.Run(name, func(t *testing.T) {
			golden(t, name+".txt", message(t, name+".yaml"))
		})
	}
}

// Goal: no file of the folder is forgotten. Method: compare it with the tables.
func TestBadFilesAllUsed(t *testing.T) {
	used := map[string]bool{}
	for _, name := range badYAML() {
		used[name] = true
	}
	for _, b := range badInputs() {
		used[b.name] = true
	}
	paths, err := filepath.Glob(badDir + "/*.yaml")
	if err != nil || len(paths) == 0 {
		t.Fatal(paths, err)
	}
	for _, p := range paths {
		if name := strings.TrimSuffix(filepath.Base(p), ".yaml"); !used[name] {
			t.Errorf("%s is in no table of this test", p)
		}
	}
}

// goldenHere is golden with the path of the folder of bad files, from any current folder.
func goldenHere(t *testing.T) func(name, got string) {
	t.Helper()
	dir, err := filepath.Abs(badDir)
	if err != nil {
		t.Fatal(err)
	}
	return func(name, got string) { golden(t, filepath.Join(dir, name+".txt"), got) }
}

// Goal: what is no readable file is refused clearly. Method: a folder made for it.
func TestBadPaths(t *testing.T) {
	check := goldenHere(t)
	t.Chdir(t.TempDir())
	if err := os.Mkdir("directory.yaml", 0o755); err != nil {
		t.Fatal(err)
	}
	check("directory", message(t, "directory.yaml"))
	check("missing-folder", message(t, "nowhere/argon.yaml"))
	if err := os.WriteFile("argon.yaml", []byte(minimal), 0o644); err != nil {
		t.Fatal(err)
	}
	check("missing", message(t, "agron.yaml"))
	check("missing-not-alike", message(t, "helium.yaml"))
	if runtime.GOOS == "linux" {
		check("device", strings.ReplaceAll(message(t, "/dev/zero"), "/dev/zero", "DEVICE"))
	}
}

// Goal: a file of 4 GiB fails at once, unread. Method: a file without blocks; reading it would
// take far longer than the second allowed, and 4 GiB of memory.
func TestOversized(t *testing.T) {
	check := goldenHere(t)
	t.Chdir(t.TempDir())
	f, err := os.Create("oversized.yaml")
	if err != nil {
		t.Fatal(err)
	}
	if err := errors.Join(f.Truncate(4<<30), f.Close()); err != nil {
		t.Fatal(err)
	}
	start := time.Now()
	text := message(t, "oversized.yaml")
	if d := time.Since(start); d > time.Second {
		t.Errorf("took %v, want less than 1 s", d)
	}
	check("oversized", text)
}

// fakeFiles is a file system that fails in a chosen way.
type fakeFiles struct {
	disk
	open func() (io.ReadCloser, error)
}

func (f fakeFiles) Open(string) (io.ReadCloser, error) { return f.open() }

// endless is a file that never ends, and counts what was read.
type endless struct{ read int }

func (e *endless) Read(p []byte) (int, error) {
	clear(p)
	e.read += len(p)
	return len(p), nil
}
func (*endless) Close() error { return nil }

// broken is a file that cannot be read.
type broken struct{}

func (broken) Read([]byte) (int, error) {
	return 0, &fs.PathError{Op: "read", Path: "x", Err: errors.New("input/output error")}
}
func (broken) Close() error { return nil }

// Goal: no permission, a failing disk and a file that grows. Method: a file system that acts so,
// since the permission of a file does not stop every user who runs tests.
func TestFailingFiles(t *testing.T) {
	check := goldenHere(t)
	t.Chdir(t.TempDir())
	if err := os.WriteFile("argon.yaml", []byte(minimal), 0o644); err != nil {
		t.Fatal(err)
	}
	fails := func(golden string, open func() (io.ReadCloser, error)) {
		t.Helper()
		c, _, err := load(fakeFiles{open: open}, "argon.yaml")
		if err == nil || c != nil {
			t.Fatalf("%s: got a case", golden)
		}
		check(golden, err.Error()+"\n")
	}
	fails("no-permission", func() (io.ReadCloser, error) {
		return nil, &fs.PathError{Op: "open", Path: "argon.yaml", Err: fs.ErrPermission}
	})
	fails("unreadable", func() (io.ReadCloser, error) { return broken{}, nil })
	var grows endless
	fails("growing", func() (io.ReadCloser, error) { return &grows, nil })
	if grows.read > 4*MaxFileBytes {
		t.Errorf("%d bytes were read of an endless file", grows.read)
	}
}

// Goal: inputs made to take long do not. Method: worst cases of 1 MiB, a bound of 30 s on a slow
// machine; none of them is a valid input.
func TestHostile(t *testing.T) {
	fill := func(s string) string { return strings.Repeat(s, MaxFileBytes/len(s)) }
	for name, src := range map[string]string{
		"brackets":  fill("["),
		"mappings":  fill("{a: "),
		"dashes":    fill("- "),
		"keys":      fill("a: 1\n"),
		"misspelt":  fill("presure: 1\n"),
		"text":      "gap: '" + fill("x")[100:] + "'",
		"digits":    "gap: " + fill("9")[100:] + " m",
		"exponent":  minimal + "initial: {density: 0e999999999 /m3}",
		"exponent2": minimal + "initial: {density: 1e-999999999 /m3}",
		"seed":      minimal + "seed: 1e999999999",
		"tones":     "drive: {tones: [" + fill("1,\n")[100:] + "]}",
		"gases":     "gas: {mixture: {" + fill("a: 1,\n")[100:] + "}}",
		"aliases": "a: &a [x,x,x,x,x,x,x,x,x]\n" + "b: &b [*a,*a,*a,*a,*a,*a,*a,*a,*a]\n" +
			"c: &c [*b,*b,*b,*b,*b,*b,*b,*b,*b]\n" + "d: &d [*c,*c,*c,*c,*c,*c,*c,*c,*c]\n" +
			"gas: {mixture: *d}\ngap: *d\n",
	} {
		start := time.Now()
		_, err := Parse(name, []byte(src))
		if err == nil || len(err.Error()) > 20_000 {
			t.Errorf("%s: got a case or an endless message", name)
		}
		if d := time.Since(start); d > 30*time.Second {
			t.Errorf("%s: took %v", name, d)
		}
	}
}
