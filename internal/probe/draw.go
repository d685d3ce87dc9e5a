package probe

import (
	"fmt"
	"math"
	"strings"

	"ionfall/internal/phys"
	"ionfall/internal/rng"
)

// Noise of a synthetic sweep.
type Noise struct {
	// Floor is a part of the current at the plasma potential, Relative one of each current.
	Floor, Relative float64
	Seed            uint64
}

// Draw is a sweep that the probe would give in the simulated plasma, from 14 temperatures below
// the plasma potential to 3.5 above it, with noise. sweeps goes up, down, up ...
func Draw(s *Simulated, setup *Setup, points, sweeps int, noise Noise) []Sweep {
	rf := setup.RF
	if math.IsNaN(rf) {
		rf = 0
	}
	t, v0 := s.Temperature.Value, s.Potential.Value
	lo, hi := v0-14*t, v0+3.5*t
	y := newSynthetic(s, setup, rf, 1, hi)
	c := y.central()
	knee := y.current(v0, c)
	stream := rng.Key{Seed: noise.Seed, Purpose: rng.Resampling, Chunk: 7}.Stream()
	list := make([]Sweep, sweeps)
	for i := range list {
		list[i].Name, list[i].Up = fmt.Sprint(i+1), i%2 == 0
		for k := range points {
			part := float64(k) / float64(points-1)
			if !list[i].Up {
				part = 1 - part
			}
			v := lo + (hi-lo)*part
			current := y.current(v, c)
			applied := v + setup.Resistance*current
			current += noise.Floor*knee*stream.Normal() + noise.Relative*current*stream.Normal()
			list[i].Voltage = append(list[i].Voltage, applied)
			list[i].Current = append(list[i].Current, current)
		}
	}
	return list
}

// CSV writes sweeps as ReadSweeps reads them; remarks go before the header.
func CSV(sweeps []Sweep, remarks ...string) []byte {
	var b strings.Builder
	for _, r := range remarks {
		b.WriteString("# " + r + "\n")
	}
	b.WriteString("voltage_V,current_A\n")
	for _, s := range sweeps {
		for k, v := range s.Voltage {
			fmt.Fprintf(&b, "%.4f,%.6g\n", v, s.Current[k])
		}
	}
	return []byte(b.String())
}

// DrawCollector is a retarding sweep of the analyser for the arriving ions, with noise as a part
// of the whole current.
func DrawCollector(a *Analyser, ions *IonArrival, points int, noise Noise) Sweep {
	s := Sweep{Up: true}
	top := 0.0
	for k, e := range ions.Energy {
		top = math.Max(top, e+ions.Width[k])
	}
	// Ions above this are rare, and bins reach far beyond them.
	var energies []float64
	for k := range points {
		energies = append(energies, -0.05*top+1.1*top*float64(k)/float64(points-1))
	}
	above, flux := a.Fold(ions, energies)
	area := math.Pi * a.Radius * a.Radius
	whole := phys.ElementaryCharge * area * a.Transmission() * flux
	stream := rng.Key{Seed: noise.Seed, Purpose: rng.Resampling, Chunk: 8}.Stream()
	for k, e := range energies {
		s.Voltage = append(s.Voltage, e+a.Potential)
		s.Current = append(s.Current, whole*(above[k]+noise.Floor*stream.Normal()))
	}
	return s
}
