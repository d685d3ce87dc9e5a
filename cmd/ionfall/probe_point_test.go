package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/invented"
	"ionfall/internal/probe"
)

// scanOf makes a folder of points with invented results and resolved inputs.
func scanOf(t *testing.T, points ...string) string {
	t.Helper()
	dir := t.TempDir()
	for i, text := range points {
		name := filepath.Join(dir, "points", "point=000"+string(rune('1'+i)))
		if err := invented.Run(name, invented.Options{Verdict: "ok", Ions: []string{"Ar+"}}); err != nil {
			t.Fatal(err)
		}
		resolved := filepath.Join(name, "resolved.yaml")
		if err := os.WriteFile(resolved, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// Goal: a measurement finds the point of a scan that has its pressure and inputs, and mistakes are
// told with their place. Method: three pressures and two voltages, units that differ from those of
// the points; too little said, what no point has, units and paths that there are not.
func TestPointOfScan(t *testing.T) {
	point := func(pressure, amplitude string) string {
		return "gap: 0.03 m\ngas:\n  pressure: " + pressure + " Pa\ndrive:\n  tones:\n  - frequency: " +
			"13560000 Hz\n    amplitude: " + amplitude + " V\n"
	}
	dir := scanOf(t, point("10", "150"), point("10", "200"), point("20", "150"), point("20", "200"),
		point("40", "200"))
	for text, want := range map[string]string{
		"pressure: 40 Pa": "point=0005",
		"pressure: 10 Pa, inputs: {drive.tones.0.amplitude: 0.2 kV}":      "point=0002",
		"inputs: {gas.pressure: 20.1 Pa, drive.tones.0.amplitude: 150 V}": "point=0003",
		"pressure: 10 Pa":                                 "p.yaml:1:82: pressure: got 10 Pa, want what only one",
		"pressure: 12 Pa":                                 "got 12 Pa, want that of a finished point of the scan, within 1 %: 10 Pa; 20 Pa; 40 Pa",
		"position: 1 mm":                                  "pressure: got nothing, want the pressure, or inputs",
		"inputs: {drive.tones.0.amplitude: 3 kg}":         "drive.tones.0.amplitude: got \"3 kg\", want a voltage",
		"inputs: {drive.tones.7.amplitude: 3 V}":          "no input drive.tones.7.amplitude",
		"inputs: {gas.pressure: 10 Pa, gap: 4 cm}":        "inputs: got gas.pressure, gap: 10 Pa, 4 cm",
		"pressure: 20 Pa, run: elsewhere/no-scan-nor-run": "elsewhere/no-scan-nor-run",
	} {
		src := "probes: [{sweeps: a.csv, tip_radius: 50 um, tip_length: 8 mm, gas: Ar, " + text + "}]"
		d, err := probe.ParseDescription("p.yaml", []byte(src))
		if err != nil {
			t.Fatal(err)
		}
		p := &d.Probes[0]
		got, err := runOf(&p.Placed, p.Run, dir, probe.At(p.Setup.Pressure, p.Inputs))
		if err != nil {
			got = err.Error()
		}
		if !strings.Contains(got, want) {
			t.Errorf("%s: got %s, want %s", text, got, want)
		}
	}
}
