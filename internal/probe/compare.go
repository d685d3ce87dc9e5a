package probe

import (
	"fmt"
	"math"
	"strings"

	"ionfall/internal/table"
)

// Row is a quantity on both sides.
type Row struct {
	Key, Label, Unit    string
	Measured, Simulated Quantity
}

// Sigma is the difference, simulated less measured, in joint standard errors; NaN if one is not
// known.
func (r *Row) Sigma() float64 {
	if !r.Measured.Known() || !r.Simulated.Known() {
		return math.NaN()
	}
	return (r.Simulated.Value - r.Measured.Value) / math.Hypot(r.Measured.SE, r.Simulated.SE)
}

// Comparison is a probe against a run.
type Comparison struct {
	Rows     []Row
	Verdict  string
	Cautions []string
	// RMS is the root mean square of the difference of measured and synthetic currents in their
	// joint errors; Aligned the same with the plasma potentials laid on each other.
	RMS, Aligned float64
	Points       int
	// Characteristic holds measured and synthetic currents, EEPF both distributions.
	Characteristic, EEPF *table.Table
}

// Compare puts a reduction beside what the run says about the same place.
func Compare(r *Result, s *Simulated, setup *Setup) *Comparison {
	c := &Comparison{}
	rf, saturation := 0.0, 1.0
	if !math.IsNaN(setup.RF) {
		rf = setup.RF
	}
	if r.fit != nil {
		rf, saturation = r.fit.rf, r.fit.saturation
	}
	top := s.Potential.Value
	var volts, current, se []float64
	if r.Characteristic != nil {
		volts, _ = r.Characteristic.Floats("voltage_V")
		current, _ = r.Characteristic.Floats("current_A")
		se, _ = r.Characteristic.Floats("current_A_se")
		top = math.Max(top, volts[len(volts)-1])
	}
	y := newSynthetic(s, setup, rf, saturation, top)
	simulated := map[string]Quantity{
		KeyElectronDensity: s.Density, KeyIonDensity: s.Ions, KeyTemperature: s.Temperature,
		KeyPlasma: s.Potential, KeyFloating: y.floating(),
	}
	for _, q := range r.Quantities {
		c.Rows = append(c.Rows, Row{q.Key, q.Label, q.Unit, q.Quantity, simulated[q.Key]})
	}
	if r.Characteristic != nil {
		c.points(r, y, volts, current, se)
		c.distributions(r, s)
	}
	c.cautions(r, s)
	c.Verdict = c.verdict(s)
	return c
}

// points compares currents one by one.
func (c *Comparison) points(r *Result, y *synthetic, volts, current, se []float64) {
	shift := y.s.Potential.Value - r.Get(KeyPlasma).Value
	var synth, synthSE, aligned, sigma []float64
	var sum, sumAligned float64
	highest := r.fit.potential + kneeRange*r.fit.shape.coldest
	for k, v := range volts {
		a, b := y.with(v)
		moved, movedSE := y.with(v + shift)
		synth, synthSE, aligned = append(synth, a), append(synthSE, b), append(aligned, moved)
		z := (a - current[k]) / math.Hypot(se[k], b)
		sigma = append(sigma, z)
		if v > highest {
			continue // above, what is drawn depends on the probe
		}
		c.Points++
		sum += z * z
		sumAligned += math.Pow((moved-current[k])/math.Hypot(se[k], movedSE), 2)
	}
	c.RMS = math.Sqrt(sum / float64(c.Points))
	c.Aligned = math.Sqrt(sumAligned / float64(c.Points))
	t := table.New("comparison_current", "measured sweep and the one drawn in the simulated plasma")
	t.AddFloat("voltage_V", "V", "voltage of the tip", volts)
	t.AddEstimate("measured_current_A", "A", "measured, electron current positive", current, se)
	t.AddEstimate("synthetic_current_A", "A", "drawn in the simulated plasma", synth, synthSE)
	t.AddFloat("aligned_current_A", "A", "the same, plasma potentials laid on each other", aligned)
	t.AddFloat("difference_sigma", "", "synthetic less measured in joint standard errors", sigma)
	c.Characteristic = t
}

// distributions puts both EEPFs on the energies of the measured one.
func (c *Comparison) distributions(r *Result, s *Simulated) {
	energy, _ := r.EEPF.Floats("energy_eV")
	value, _ := r.EEPF.Floats("eepf_eVm32")
	se, _ := r.EEPF.Floats("eepf_eVm32_se")
	simulated := make([]float64, len(energy))
	for k, e := range energy {
		simulated[k] = s.Distribution.At(e)
	}
	t := table.New("comparison_eepf", "measured and simulated electron energy probability function")
	t.AddFloat("energy_eV", "eV", "energy", energy)
	t.AddEstimate("measured_eVm32", "eV^-3/2", "from the second derivative", value, se)
	t.AddFloat("simulated_eVm32", "eV^-3/2", "of "+s.Region, simulated)
	c.EEPF = t
}

func (c *Comparison) cautions(r *Result, s *Simulated) {
	if s.Verdict == "fail" {
		c.Cautions = append(c.Cautions, "the run's own verdict is fail: nothing follows from it")
	}
	c.Cautions = append(c.Cautions,
		"the errors of the simulation are statistical; uncertain inputs (yields, gas temperature, "+
			"voltage at the electrode) are not in them",
		"the plasma potential of a chamber depends on its grounded walls, which a simulation between "+
			"two plates does not know: compare shapes with potentials laid on each other")
	if n := s.Density; n.Value < 1e12 {
		c.Cautions = append(c.Cautions, "there are hardly any electrons at the place of the probe: it "+
			"may stand in the sheath")
	}
	c.Cautions = append(c.Cautions, r.Cautions...)
}

// Bounds of the verdict in joint standard errors.
const (
	agreeSigma    = 2.0
	disagreeSigma = 3.0
)

// verdict is one honest sentence or two.
func (c *Comparison) verdict(s *Simulated) string {
	var off, doubt, missing []string
	known, loosest := 0, 0.0
	for i := range c.Rows {
		r := &c.Rows[i]
		z := r.Sigma()
		if math.IsNaN(z) {
			missing = append(missing, r.Label)
			continue
		}
		known++
		loosest = math.Max(loosest,
			math.Hypot(r.Measured.SE, r.Simulated.SE)/math.Abs(r.Measured.Value))
		text := fmt.Sprintf("%s %s (%+.1f sigma)", r.Label, r.how(), z)
		switch {
		case math.Abs(z) > disagreeSigma:
			off = append(off, text)
		case math.Abs(z) > agreeSigma:
			doubt = append(doubt, text)
		}
	}
	var text string
	switch {
	case s.Verdict == "fail":
		return "No verdict: the run failed its own checks."
	case known == 0:
		return "No verdict: the sweeps do not tell any quantity."
	case len(off) > 0:
		text = "Simulation and probe disagree beyond their errors: " +
			strings.Join(append(off, doubt...), "; ") + "."
	case len(doubt) > 0:
		text = "Simulation and probe agree only loosely: " + strings.Join(doubt, "; ") + "."
	default:
		text = fmt.Sprintf("Simulation and probe agree within %g joint standard errors in all %d "+
			"quantities; a difference of up to %.2g %% would not have been seen.", agreeSigma, known,
			100*agreeSigma*loosest)
	}
	if len(missing) > 0 {
		text += " Not compared: " + strings.Join(missing, ", ") + "."
	}
	return text
}

// how says how the simulation differs.
func (r *Row) how() string {
	if r.Unit == "V" {
		return fmt.Sprintf("%+.3g V in the simulation", r.Simulated.Value-r.Measured.Value)
	}
	return fmt.Sprintf("%.3g times as large in the simulation",
		r.Simulated.Value/r.Measured.Value)
}

// Simulated are the simulated quantities by their keys.
func (c *Comparison) Simulated() map[string]Quantity {
	out := map[string]Quantity{}
	for i := range c.Rows {
		out[c.Rows[i].Key] = c.Rows[i].Simulated
	}
	return out
}
