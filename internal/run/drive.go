package run

import (
	"fmt"
	"math"
	"path/filepath"

	"ionfall/internal/config"
	"ionfall/internal/inputerr"
	"ionfall/internal/store"
	"ionfall/pic"
)

// waveformFile is the copy of a trace in the results.
const waveformFile = "waveform.csv"

// startAmplitude is what a run starts with when a target is to find the voltage [V].
const startAmplitude = 200

// loadTrace reads the trace that the input names, relative to the folder that the input is in, and
// puts its tones in the place of it. kept, if not nil, is the file's content.
func (p *Plan) loadTrace(folder string, kept []byte) error {
	t := p.Case.Drive.Trace
	if t == nil {
		return nil
	}
	var err error
	if kept != nil {
		p.trace, err = t.Read(t.File, kept)
	} else {
		p.trace, err = t.Load(folder)
	}
	if err != nil {
		return err
	}
	d := &p.Case.Drive
	p.band = len(p.trace.Tones)
	d.Trace, d.Tones, d.Bias = nil, p.trace.Tones, d.Bias+p.trace.Bias
	if d.BlockingCapacitor.Given() {
		d.Bias = 0 // the capacitor takes it
	}
	if d.Fundamental() <= 0 {
		return inputerr.List{p.Case.Errorf("drive.trace", "a waveform without tones", "a waveform", "")}
	}
	return nil
}

// writeTrace keeps the trace beside the results.
func (p *Plan) writeTrace(folder *store.Run) error {
	if p.trace == nil {
		return nil
	}
	return folder.WriteFile(filepath.Base(waveformFile), p.trace.Source)
}

// area returns that of the powered electrode [m2], 1 if it is not given: nothing is in total then.
func (p *Plan) area() float64 {
	if a := p.Case.Electrodes.Powered.Area; a > 0 {
		return a
	}
	return 1
}

// drive returns the drive in harmonics of the fundamental.
func (p *Plan) drive() pic.Drive {
	of := &p.Case.Drive
	d := pic.Drive{Bias: of.Bias}
	fundamental := of.Fundamental()
	if of.Pulse != nil {
		d.Gate, d.Ramp = of.Pulse.Duty, fundamental/p.slowestTone()
	}
	sum := p.amplitude
	if sum == 0 {
		sum = math.Min(startAmplitude, of.Limit())
	}
	shares := of.Shares()
	for i, t := range of.Tones {
		tone := pic.Tone{
			Harmonic: int(math.Round(t.Frequency / fundamental)), Amplitude: t.Amplitude, Phase: t.Phase,
		}
		switch {
		case of.Targeted():
			tone.Amplitude = shares[i] * sum
		case t.Current > 0:
			tone.Amplitude = t.Current
		}
		d.Tones = append(d.Tones, tone)
	}
	return d
}

// slowestTone is the lowest frequency of the drive [Hz].
func (p *Plan) slowestTone() float64 {
	least := math.Inf(1)
	for _, t := range p.Case.Drive.Tones {
		least = math.Min(least, t.Frequency)
	}
	return least
}

// fastestHarmonic is the largest harmonic of the drive.
func (p *Plan) fastestHarmonic() int {
	most, largest := 1, 0.0
	tones := p.drive().Tones
	for _, t := range tones {
		largest = math.Max(largest, t.Amplitude)
	}
	for _, t := range tones {
		// What a trace has beyond its main tones is small and does not ask for its own steps.
		if t.Amplitude > 0.01*largest {
			most = max(most, t.Harmonic)
		}
	}
	return most
}

// loudest returns the tone that moves the most current.
func (p *Plan) loudest() pic.Tone {
	tones := p.drive().Tones
	best := tones[0]
	for _, t := range tones {
		a, b := t.Amplitude, best.Amplitude
		if !p.Case.Drive.CurrentDriven() {
			a, b = a*float64(t.Harmonic), b*float64(best.Harmonic)
		}
		if a > b {
			best = t
		}
	}
	return best
}

// reactor enters geometry and circuit into a configuration.
func (p *Plan) reactor(c *pic.Config) {
	d := &p.Case.Drive
	c.Geometry, c.Drive, c.CurrentDrive = p.geometry(), p.drive(), d.CurrentDriven()
	if c.CurrentDrive {
		return // it flows through whatever is in series
	}
	layers := p.layers()
	c.Network = pic.Network{
		Capacitance: inSeries(d.BlockingCapacitor.PerArea(p.area()), layers[0], layers[1]),
		Resistance:  d.Resistance.TimesArea(p.area()), Inductance: d.Inductance.TimesArea(p.area()),
	}
}

func (p *Plan) geometry() pic.Geometry {
	g := p.Case.Geometry
	switch {
	case g.AreaRatio == 1 || g.Shape == config.Planar:
		return pic.Geometry{}
	case g.Shape == config.Cylindrical:
		return pic.Geometry{Shape: pic.Cylinders, AreaRatio: g.AreaRatio}
	}
	return pic.Geometry{Shape: pic.Spheres, AreaRatio: g.AreaRatio}
}

// bare is the configuration of the empty gap.
func (p *Plan) bare() pic.Config {
	c := pic.Config{Gap: p.Case.Gap, Cells: 2, Period: p.period()}
	p.reactor(&c)
	return c
}

// volume of the gap per area of the powered electrode [m].
func (p *Plan) volume() float64 {
	c := p.bare()
	return c.Volume()
}

// largestVoltage is about the largest voltage across the gap [V]. With a given current the sheaths,
// some third of the gap, have it.
func (p *Plan) largestVoltage() float64 {
	if !p.Case.Drive.CurrentDriven() {
		return p.drive().Largest()
	}
	c := p.bare()
	return 0.3 * c.LargestVoltage()
}

// circuitLines describe what connects the drive with the gap.
func (p *Plan) circuitLines() []Line {
	var list []Line
	add := func(name, text string, args ...any) {
		list = append(list, Line{name, fmt.Sprintf(text, args...)})
	}
	c := p.bare()
	if g := c.Geometry; g.Shape != pic.Plates {
		r := p.Case.Gap / g.Curvature()
		add("geometry", "%s of radii %.4g and %.4g mm, areas 1 to %g", g.Shape, 1e3*r,
			1e3*(r+p.Case.Gap), g.AreaRatio)
	}
	if c.Network != (pic.Network{}) {
		omega := 2 * math.Pi * float64(p.loudest().Harmonic) / p.period()
		add("circuit", "blocking capacitor %.4g F/m2, resistance %.4g ohm m2, inductance %.4g H m2; "+
			"the empty gap has %.4g F/m2, %.4g ohm m2 at %.6g MHz", c.Network.Capacitance,
			c.Network.Resistance, c.Network.Inductance, c.VacuumCapacitance(),
			1/(omega*c.VacuumCapacitance()), omega/(2e6*math.Pi))
	}
	if d := &p.Case.Drive; d.Pulse != nil {
		add("pulse", "%.6g us long, on for %.6g us; this is the period of all that follows",
			1e6*p.period(), 1e6*d.Pulse.Duty*p.period())
	}
	if p.trace != nil {
		add("trace", "%d harmonics are kept, which leaves out %.2g %% of the waveform's root mean square",
			p.band, 100*p.trace.Left/p.trace.All)
	}
	if p.Case.Drive.Targeted() {
		add("voltage", "sought from %.4g V on, up to %.4g V (sum of amplitudes)",
			p.drive().Largest(), p.Case.Drive.Limit())
	}
	return list
}
