package report

import (
	"fmt"
	"math"

	"ionfall/internal/table"
)

func electronKinds() []Kind {
	return []Kind{{
		ID: "eepf", Title: "Electron energy probability function", group: groupElectron,
		About: "By part of the gap; the integral of sqrt(E) times it over E is 1. Dotted is the " +
			"Maxwellian of the same mean energy, which is a straight line here.",
		build: electronFigure,
	}}
}

func electronFigure(k Kind, runs []*Run, s Select) ([]Figure, error) {
	f := Figure{
		ID: k.ID, Title: k.Title, Runs: marks(runs),
		X: Axis{Name: "energy_eV", Label: "electron energy", Unit: "eV"},
		Y: Axis{Name: "eepf_eVm32", Label: "EEPF", Unit: "eV^-3/2", Log: true},
	}
	for i, r := range runs {
		t, err := tableOf(r, "electron_energy")
		if err != nil {
			return nil, err
		}
		if t == nil {
			continue
		}
		list, err := parts(t, "region")
		if err != nil {
			return nil, err
		}
		for _, p := range list {
			if !fits(s.Region, p.keys[0]) {
				continue
			}
			two, err := eepf(t, p, i)
			if err != nil {
				return nil, err
			}
			f.Series = append(f.Series, two...)
		}
	}
	if len(f.Series) == 0 {
		return nil, nil
	}
	f.Alt = altOf(&f)
	return []Figure{f}, nil
}

// eepf is the measured function and the Maxwellian of its mean energy.
func eepf(t *table.Table, p part, run int) ([]Series, error) {
	x, err := pick(t, "energy_eV", p.rows, 1)
	if err != nil {
		return nil, err
	}
	width, err := pick(t, "width_eV", p.rows, 1)
	if err != nil {
		return nil, err
	}
	y, err := pick(t, "eepf_eVm32", p.rows, 1)
	if err != nil {
		return nil, err
	}
	se := errorsOf(t, "eepf_eVm32", p.rows, 1)
	n := filled(y)
	x, y, width, se = x[:n], y[:n], width[:n], se[:min(n, len(se))]
	measured := Series{Label: p.keys[0], Run: run, X: x, Y: y, SE: se, Width: width, Steps: true}
	mean := 0.0
	for i := range y {
		mean += math.Pow(x[i], 1.5) * y[i] * width[i]
	}
	if !(mean > 0) {
		return []Series{measured}, nil
	}
	temperature := 2.0 / 3 * mean
	law := Series{
		Label: fmt.Sprintf("%s: Maxwellian, %.2f eV", p.keys[0], temperature), Run: run, Law: true,
		Key: "Maxwellian of the same mean energy",
	}
	// Down to the smallest value that is shown of the measured one.
	smallest := math.Inf(1)
	for _, v := range y {
		if v > 0 {
			smallest = math.Min(smallest, v)
		}
	}
	for _, e := range x {
		v := maxwellian(e, temperature)
		if v < smallest {
			break
		}
		law.X, law.Y = append(law.X, e), append(law.Y, v)
	}
	return []Series{measured, law}, nil
}

// maxwellian is the probability function of an energy at a temperature [eV^-3/2], both in eV.
func maxwellian(energyEV, temperatureEV float64) float64 {
	return 2 / math.SqrtPi * math.Pow(temperatureEV, -1.5) * math.Exp(-energyEV/temperatureEV)
}
