package store

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/table"
)

// secondReport is what the second reader says about a folder.
type secondReport struct {
	Tables []struct {
		Name    string
		Rows    int
		Columns []struct {
			Name, Type           string
			Count, NaN, Distinct int
			Min, Max             any
		}
	}
	Scalars, Distributions int
	Faults                 []string
}

// secondReader runs the independent reader on a folder and returns its report and its messages.
func secondReader(t *testing.T, dir string) (secondReport, string, int) {
	t.Helper()
	node, err := exec.LookPath("node")
	if err != nil {
		t.Skip("no node here: the second reader of Parquet is not run")
	}
	if !exists("interop/node_modules/hyparquet") {
		t.Skip("second reader of Parquet not installed: npm ci in internal/store/interop")
	}
	var out, messages bytes.Buffer
	cmd := exec.Command(node, "check.mjs", "--json", dir)
	cmd.Dir, cmd.Stdout, cmd.Stderr = "interop", &out, &messages
	status := 0
	var exit *exec.ExitError
	if err := cmd.Run(); errors.As(err, &exit) {
		status = exit.ExitCode()
	} else if err != nil {
		t.Fatal(err)
	}
	var report secondReport
	if err := json.Unmarshal(out.Bytes(), &report); err != nil {
		t.Fatalf("%v\n%s%s", err, out.Bytes(), messages.String())
	}
	return report, messages.String(), status
}

// ions returns distributions at both electrodes and the results that follow from them.
func ions() (*table.Table, map[string]any) {
	var electrodes, species []string
	var energyEV, widthEV, perEV, se []float64
	fluxes, energies := map[string]any{}, map[string]any{}
	for i, electrode := range []string{"powered", "grounded"} {
		flux, energy := map[string]any{}, map[string]any{}
		for j, name := range []string{"Ar+", "SiH3+"} {
			sum, mean := 0.0, 0.0
			for k := range 400 {
				e, w := 0.25+0.5*float64(k), 0.5
				f := 1e17 * (1 + float64(i)) * e * math.Exp(-e/(20+float64(10*j)))
				electrodes, species = append(electrodes, electrode), append(species, name)
				energyEV, widthEV = append(energyEV, e), append(widthEV, w)
				perEV, se = append(perEV, f), append(se, f/100)
				sum, mean = sum+f*w, mean+f*w*e
			}
			flux[name] = Value{sum, sum / 1000, "1/(m2 s)"}
			energy[name] = Value{mean/sum + 0.1, 0.01, "eV"}
		}
		fluxes[electrode], energies[electrode] = flux, energy
	}
	t := table.New("ion_energy", "energy of the ions at the electrodes")
	t.AddText("electrode", "powered or grounded", electrodes)
	t.AddText("species", "what arrives", species)
	t.AddFloat("energy_eV", "eV", "centre of the bin", energyEV)
	t.AddFloat("width_eV", "eV", "width of the bin", widthEV)
	t.AddEstimate("flux_m2pseV", "1/(m2 s eV)", "flux per energy", perEV, se)
	return t, map[string]any{"ion_flux_m2ps": fluxes, "ion_mean_energy_eV": energies}
}

// readable is mixed with a value in every column: the second reader refuses one of NaN alone.
func readable(n int) *table.Table {
	t := mixed(n)
	t.Columns[3].Float[0] = 0.5
	return t
}

// TestSecondReader: a reader that shares no code with ours finds in a folder what was written.
func TestSecondReader(t *testing.T) {
	run := newRun(t)
	tables := []*table.Table{readable(valueBatch + 904)}
	energies, results := ions()
	s := sample()
	s.Results["ion_flux_m2ps"] = results["ion_flux_m2ps"]
	s.Results["ion_mean_energy_eV"] = results["ion_mean_energy_eV"]
	scalars, err := s.Scalars()
	if err != nil {
		t.Fatal(err)
	}
	tables = append([]*table.Table{energies}, append(tables, scalars)...) // in order of names
	for _, w := range tables[:2] {
		if err := run.WriteTable(w, map[string]string{"seed": "1"}); err != nil {
			t.Fatal(err)
		}
	}
	if err := run.WriteSummary(s, nil); err != nil {
		t.Fatal(err)
	}
	report, messages, status := secondReader(t, run.Path(""))
	if status != 0 || messages != "" {
		t.Fatalf("status %d: %s", status, messages)
	}
	if report.Scalars != scalars.Rows() || report.Distributions != 8 {
		t.Errorf("%d scalars, %d distributions", report.Scalars, report.Distributions)
	}
	if len(report.Tables) != len(tables) {
		t.Fatalf("%d tables, want %d", len(report.Tables), len(tables))
	}
	for i, got := range report.Tables {
		want := tables[i]
		if got.Name != want.Name+".parquet" || got.Rows != want.Rows() ||
			len(got.Columns) != len(want.Columns) {
			t.Fatalf("got %s with %d rows, %d columns", got.Name, got.Rows, len(got.Columns))
		}
		for k, c := range got.Columns {
			wantLine := describe(want.Columns[k])
			line := fmt.Sprintf("%s %s %d nan=%d distinct=%d min=%v max=%v", c.Name, c.Type, c.Count,
				c.NaN, c.Distinct, number(c.Min), number(c.Max))
			if line != wantLine {
				t.Errorf("%s: it reads %s\nwritten was %s", got.Name, line, wantLine)
			}
		}
	}
}

// number returns a number of the report as this program prints it.
func number(v any) string {
	switch v := v.(type) {
	case nil:
		return ""
	case string: // a whole number or an infinity
		return strings.Replace(strings.Replace(v, "-Infinity", "-Inf", 1), "Infinity", "+Inf", 1)
	}
	return fmt.Sprint(v)
}

// describe says of a column what the second reader has to say.
func describe(c table.Column) string {
	kind, nan, distinct, least, most := "text", 0, map[string]bool{}, "", ""
	for _, s := range c.Text {
		distinct[s] = true
	}
	if c.Int != nil {
		lo, hi := c.Int[0], c.Int[0]
		for _, v := range c.Int {
			lo, hi = min(lo, v), max(hi, v)
		}
		kind, least, most = "int", fmt.Sprint(lo), fmt.Sprint(hi)
	}
	if c.Float != nil {
		lo, hi := math.Inf(1), math.Inf(-1)
		for _, v := range c.Float {
			if math.IsNaN(v) {
				nan++
				continue
			}
			lo, hi = min(lo, v), max(hi, v)
		}
		kind, least, most = "float", fmt.Sprint(lo), fmt.Sprint(hi)
	}
	return fmt.Sprintf("%s %s %d nan=%d distinct=%d min=%s max=%s", c.Name, kind, c.Len(), nan,
		len(distinct), least, most)
}

// TestSecondReaderFindsFaults: each fault it is there for makes it fail, with a message.
func TestSecondReaderFindsFaults(t *testing.T) {
	if testing.Short() {
		t.Skip("starts the second reader many times")
	}
	nans := func() *table.Table {
		w := table.New("nans", "")
		w.AddFloat("a", "", "doc", []float64{math.NaN(), math.NaN()})
		return w
	}
	for want, spoil := range map[string]func(run *Run, s *Summary) error{
		"scalars.parquet: self_bias_V is NaN +- NaN V, summary.json has 1": func(run *Run,
			s *Summary,
		) error {
			s.Results["self_bias_V"] = Value{1, math.NaN(), "V"}
			return run.WriteJSON(SummaryFile, s)
		},
		"scalars.parquet: ion_extra is not in summary.json": func(run *Run, s *Summary) error {
			s.Results["ion_extra"] = Value{1, 0, ""}
			w, err := s.Scalars()
			return errors.Join(err, run.WriteTable(w, nil))
		},
		"scalars.parquet: gap_m of summary.json is missing": func(run *Run, s *Summary) error {
			s.Results["gap_m"] = Value{1, 0, "m"}
			return run.WriteJSON(SummaryFile, s)
		},
		"powered.Ar+ integrates to": func(run *Run, _ *Summary) error {
			w, _ := ions()
			flux, err := w.Floats("flux_m2pseV")
			flux[20] *= 1 + 1e-6
			return errors.Join(err, run.WriteTable(w, nil))
		},
		"grounded.SiH3+ has the mean energy": func(run *Run, s *Summary) error {
			v, _ := s.Lookup("ion_mean_energy_eV.grounded.SiH3+")
			grounded := s.Results["ion_mean_energy_eV"].(map[string]any)["grounded"]
			grounded.(map[string]any)["SiH3+"] = Value{v.Value + 0.3, v.SE, v.Unit}
			return run.WriteSummary(s, nil)
		},
		"nans.parquet: column a: every value is NaN": func(run *Run, _ *Summary) error {
			return run.WriteTable(nans(), nil)
		},
		"mixed.parquet: column x_m: no values": func(run *Run, _ *Summary) error {
			return run.WriteTable(mixed(0), nil)
		},
		"broken.parquet: ": func(run *Run, _ *Summary) error {
			return run.WriteFile("broken.parquet", []byte("PAR1 no table PAR1"))
		},
		"no *.parquet": func(run *Run, _ *Summary) error {
			return errors.Join(run.Remove("scalars.parquet"), run.Remove("ion_energy.parquet"))
		},
	} {
		run := newRun(t)
		w, results := ions()
		s := &Summary{Verdict: OK, Results: results}
		s.Results["self_bias_V"] = Value{math.NaN(), math.NaN(), "V"}
		err := errors.Join(run.WriteTable(w, nil), run.WriteSummary(s, nil), spoil(run, s))
		if err != nil {
			t.Fatal(err)
		}
		_, messages, status := secondReader(t, run.Path(""))
		if status != 1 || !strings.Contains(messages, want) {
			t.Errorf("status %d, %s\nwant %s", status, messages, want)
		}
	}
}

// TestSecondReaderLock: the lock file names no host, so that any registry serves.
func TestSecondReaderLock(t *testing.T) {
	b, err := os.ReadFile(filepath.Join("interop", "package-lock.json"))
	if err != nil {
		t.Fatal(err)
	}
	if bytes.Contains(b, []byte("resolved")) || bytes.Contains(b, []byte("://")) ||
		!bytes.Contains(b, []byte(`"integrity"`)) {
		t.Error("package-lock.json names a host or lacks checksums")
	}
}
