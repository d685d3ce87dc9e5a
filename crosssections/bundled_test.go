package crosssections

import (
	"flag"
	"fmt"
	"os"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

var update = flag.Bool("update", false, "write the list of bundled tables anew")

// Goal: no bundled cross section changes unnoticed: not by a factor, a lost row or process, a
// threshold, the frame of its energy. Method: a list of all with their largest value, which can be
// looked up in the sources, and the sum of their rows. Whether the list is right is asked by
// TestAnchors and the swarms in mcc.
func TestBundledTablesAreTheListed(t *testing.T) {
	const list = "testdata/bundled.golden"
	library, err := Bundled()
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	b.WriteString("gas, process: projectile, kind, frame, threshold [eV]; largest [m2] at [eV]; " +
		"rows, sum [m2]\n")
	for _, name := range library.Names() {
		for _, set := range bundledGas(t, name).Sets {
			gas := bundledGas(t, name+"/"+set)
			for _, all := range [][]Process{gas.Electron, gas.IonNeutral, gas.Neutral} {
				for i := range all {
					fmt.Fprintf(&b, "%s/%s, %s\n", name, set, listed(&all[i]))
				}
			}
		}
	}
	if *update {
		if err := os.WriteFile(list, []byte(b.String()), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(list)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(strings.Split(string(want), "\n"), strings.Split(b.String(), "\n")); diff != "" {
		t.Errorf("tables changed; if that is meant, see each and give -update:\n%s", diff)
	}
}

func listed(p *Process) string {
	sum, largest, at := 0.0, 0.0, 0.0
	for i, q := range p.Table.CrossSection {
		sum += q
		if q > largest {
			largest, at = q, p.Table.Energy[i]
		}
	}
	return fmt.Sprintf("%s: %s, %v, %v, %g; %.4g at %.4g; %d, %.6g", p.Name, p.Projectile, p.Kind,
		p.Frame, p.Threshold, largest, at, len(p.Table.Energy), sum)
}
