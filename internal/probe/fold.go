package probe

import (
	"errors"
	"math"
	"strings"

	"ionfall/internal/table"
)

// IonArrival are the ions that hit an electrode in a run, by energy and angle.
type IonArrival struct {
	Energy, Width []float64 // middles and widths of the bins [eV]
	Angle         []float64 // to the normal [rad]
	Flux          []float64 // of the bin [1/(m2 s)]
	// FluxSE is the standard error of the whole flux.
	FluxSE float64
}

// NewIonArrival reads the table ion_angle of a run, for the positive ions at an electrode.
func NewIonArrival(t *table.Table, electrode string) (*IonArrival, error) {
	where, err0 := t.Texts("electrode")
	species, err1 := t.Texts("species")
	energy, err2 := t.Floats("energy_eV")
	width, err3 := t.Floats("width_eV")
	angle, err4 := t.Floats("angle_deg")
	flux, err5 := t.Floats("flux_m2pseVdeg")
	if err := errors.Join(err0, err1, err2, err3, err4, err5); err != nil {
		return nil, err
	}
	a := &IonArrival{}
	const binDegrees = 1
	for k := range where {
		if where[k] != electrode || !strings.HasSuffix(species[k], "+") || !(flux[k] > 0) {
			continue
		}
		a.Energy, a.Width = append(a.Energy, energy[k]), append(a.Width, width[k])
		a.Angle = append(a.Angle, angle[k]*math.Pi/180)
		a.Flux = append(a.Flux, flux[k]*width[k]*binDegrees)
	}
	if len(a.Flux) == 0 {
		return nil, errors.New("ion_angle: no positive ions at the electrode " + electrode)
	}
	return a, nil
}

const (
	// splitBin spreads an energy bin over so many parts, since bins of the angle table are wide.
	splitBin = 8
	// fwhmPerSigma of a Gaussian is 2 sqrt(2 ln 2).
	fwhmPerSigma = 2.3548200450309493
)

// Fold is what an analyser would see: the part of the ions above each energy along the axis [eV],
// of those within the acceptance, and their flux.
func (a *Analyser) Fold(ions *IonArrival, energies []float64) (above []float64, flux float64) {
	above = make([]float64, len(energies))
	sigma := a.Resolution / fwhmPerSigma
	for k, f := range ions.Flux {
		if ions.Angle[k] > a.Acceptance {
			continue
		}
		flux += f
		cos2 := math.Pow(math.Cos(ions.Angle[k]), 2)
		for part := range splitBin {
			shift := (float64(part)+0.5)/splitBin - 0.5
			e := (ions.Energy[k] + shift*ions.Width[k]) * cos2
			for i, at := range energies {
				above[i] += f / splitBin * aboveGauss(at, e, sigma)
			}
		}
	}
	for i := range above {
		above[i] /= flux
	}
	return above, flux
}

// aboveGauss is the part of a Gaussian around e that is above at; of a step if it has no width.
func aboveGauss(at, e, sigma float64) float64 {
	switch {
	case e-at > 6*sigma:
		return 1
	case at-e > 6*sigma || sigma == 0:
		return 0
	}
	return 0.5 * math.Erfc((at-e)/(math.Sqrt2*sigma))
}

// AnalyserComparison is an analyser against the folded arrival of a run.
type AnalyserComparison struct {
	Rows    []Row
	Verdict string
	// Folded is the simulated distribution as the analyser would see it, on the measured energies
	// [1/eV].
	Folded []float64
}

// CompareAnalyser folds the simulated ions with the analyser and reduces the curve like the
// measured one. fluxSE and energySE are relative errors of the run's flux and mean energy.
func CompareAnalyser(r *AnalyserResult, a *Analyser, ions *IonArrival, fluxSE, energySE float64,
	verdict string,
) (*AnalyserComparison, error) {
	if len(r.Voltage) < MinPoints {
		return nil, errors.New("too few points")
	}
	above, flux := a.Fold(ions, r.Voltage)
	c := &AnalyserComparison{}
	spacing := r.Voltage[1] - r.Voltage[0]
	s, err := newSmoothing(r.Window, spacing, len(above))
	if err != nil {
		return nil, err
	}
	for _, slope := range s.filter.Apply(above, 1, spacing) {
		c.Folded = append(c.Folded, -slope/above[0])
	}
	values := r.collectorScalars(above, baseline(above))
	for i, q := range r.Quantities {
		simulated := Quantity{values[i], energySE * values[i], q.Unit, ""}
		if q.Key == KeyIonFlux {
			simulated = Quantity{flux, fluxSE * flux, q.Unit, ""}
		}
		if math.IsNaN(simulated.Value + simulated.SE) {
			simulated = unknown(q.Unit, "the sweep does not reach it")
		}
		c.Rows = append(c.Rows, Row{q.Key, q.Label, q.Unit, q.Quantity, simulated})
	}
	whole := &Comparison{Rows: c.Rows}
	c.Verdict = strings.ReplaceAll(whole.verdict(&Simulated{Verdict: verdict}), "probe", "analyser")
	return c, nil
}
