package examples

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/phys"
	"ionfall/internal/probe"
)

// Goal: the sweeps of the example give the density and temperature of the discharge that they were
// drawn from. Method: reduced as the page says; values of that run (250 V, 300 K), 4.5 errors.
func TestProbeExample(t *testing.T) {
	const folder = "probe-comparison"
	read := func(name string) []byte {
		src, err := os.ReadFile(filepath.Join(folder, name))
		if err != nil {
			t.Fatal(err)
		}
		return src
	}
	page := string(read("README.md"))
	for _, want := range []string{
		"You will learn", "probe read", "probe compare", "probe adjust", "invented",
	} {
		if !strings.Contains(page, want) {
			t.Errorf("the page does not say %q", want)
		}
	}
	d, err := probe.ParseDescription("probe.yaml", read("probe.yaml"))
	if err != nil {
		t.Fatal(err)
	}
	p := d.Probes[0]
	f, err := probe.ReadSweeps(p.Sweeps, read(p.Sweeps), p.Columns)
	if err != nil {
		t.Fatal(err)
	}
	p.Setup.IonMass = 39.948 * phys.AtomicMass
	r, err := probe.Reduce(f.Sweeps, &p.Setup, probe.Choices{Seed: 1, Resamplings: 30})
	if err != nil {
		t.Fatal(err)
	}
	for key, want := range map[string]float64{
		probe.KeyElectronDensity: 3.868e15, probe.KeyTemperature: 2.1565, probe.KeyPlasma: 112.206,
	} {
		if q := r.Get(key); !(math.Abs(q.Value-want) < 4.5*q.SE) {
			t.Errorf("%s: got %.5g +- %.2g, want %.5g", key, q.Value, q.SE, want)
		}
	}
}
