package report

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

func wallKinds() []Kind {
	return []Kind{
		{
			ID: "ion-energy", Title: "Ion energy distribution", group: groupWall,
			About: "Flux of each kind of ion by the energy it arrives with. The shaded band is plus " +
				"and minus one standard error.",
			build: func(k Kind, runs []*Run, s Select) ([]Figure, error) {
				return energyFigures(k, runs, s, charged)
			},
		},
		{
			ID: "neutral-energy", Title: "Fast neutral energy distribution", group: groupWall,
			About: "Flux of each kind of fast neutral by the energy it arrives with, above the " +
				"energy from which the input has them followed. The shaded band is plus and minus " +
				"one standard error.",
			build: func(k Kind, runs []*Run, s Select) ([]Figure, error) {
				return energyFigures(k, runs, s, func(name string) bool { return !charged(name) })
			},
		},
		{
			ID: "ion-energy-share", Title: "Share of the ions above an energy", group: groupWall,
			About: "The part of each flux that arrives with more than the energy on the axis.",
			build: shareFigures,
		},
		{
			ID: "ion-angle", Title: "Energy and angle", group: groupWall,
			About: "Flux by energy and by angle to the surface normal. Colours are logarithmic.",
			build: angleFigures,
		},
	}
}

// charged tells ions from neutrals by their name.
func charged(species string) bool {
	return strings.HasSuffix(species, "+") || strings.HasSuffix(species, "-")
}

var electrodes = [...]string{"grounded", "powered"}

// eachSpectrum calls f for every energy distribution at an electrode.
func eachSpectrum(runs []*Run, electrode string, s Select,
	f func(run int, species string, x, width, y, se Numbers),
) error {
	for i, r := range runs {
		t, err := tableOf(r, "ion_energy")
		if err != nil {
			return err
		}
		if t == nil {
			continue
		}
		list, err := parts(t, "electrode", "species")
		if err != nil {
			return err
		}
		for _, p := range list {
			if p.keys[0] != electrode || !fits(s.Species, p.keys[1]) {
				continue
			}
			x, err := pick(t, "energy_eV", p.rows, 1)
			if err != nil {
				return err
			}
			width, err := pick(t, "width_eV", p.rows, 1)
			if err != nil {
				return err
			}
			y, err := pick(t, "flux_m2pseV", p.rows, 1)
			if err != nil {
				return err
			}
			n := filled(y)
			se := errorsOf(t, "flux_m2pseV", p.rows, 1)
			f(i, p.keys[1], x[:n], width[:n], y[:n], se[:min(n, len(se))])
		}
	}
	return nil
}

// filled is how many values there are up to the last that is not zero, and one more to show that
// it ends.
func filled(y Numbers) int {
	n := len(y)
	for n > 0 && (y[n-1] == 0 || math.IsNaN(y[n-1])) {
		n--
	}
	return min(n+1, len(y))
}

func energyFigures(k Kind, runs []*Run, s Select, of func(species string) bool,
) ([]Figure, error) {
	var list []Figure
	for _, electrode := range electrodes {
		if !fits(s.Electrode, electrode) {
			continue
		}
		f := Figure{
			ID: k.ID + "-" + electrode, Runs: marks(runs),
			Title: k.Title + ", " + electrode + " electrode",
			X:     Axis{Name: "energy_eV", Label: "energy at impact", Unit: "eV"},
			Y:     Axis{Name: "flux_m2pseV", Label: "flux per energy", Unit: "1/(m2 s eV)"},
		}
		err := eachSpectrum(runs, electrode, s, func(run int, species string,
			x, width, y, se Numbers,
		) {
			if !of(species) {
				return
			}
			f.Series = append(f.Series, Series{
				Label: species, Run: run, X: x, Y: y, SE: se, Width: width, Steps: true,
			})
		})
		if err != nil {
			return nil, err
		}
		if len(f.Series) > 0 {
			f.Alt = altOf(&f)
			list = append(list, f)
		}
	}
	return list, nil
}

func shareFigures(k Kind, runs []*Run, s Select) ([]Figure, error) {
	var list []Figure
	for _, electrode := range electrodes {
		if !fits(s.Electrode, electrode) {
			continue
		}
		f := Figure{
			ID: k.ID + "-" + electrode, Runs: marks(runs),
			Title: k.Title + ", " + electrode + " electrode",
			X:     Axis{Name: "energy_eV", Label: "energy", Unit: "eV"},
			Y: Axis{
				Name: "share_above", Label: "share of the flux that arrives with more",
				From: 0, To: 1,
			},
			About: k.About + " Errors of the single bins are correlated in such a sum and are " +
				"not shown; those of the shares above the thresholds of the input are in the table.",
		}
		err := eachSpectrum(runs, electrode, s, func(run int, species string,
			x, width, y, _ Numbers,
		) {
			if !charged(species) {
				return
			}
			f.Series = append(f.Series, shareAbove(species, run, x, width, y))
		})
		if err != nil {
			return nil, err
		}
		if len(f.Series) > 0 {
			f.Alt = shareAlt(&f)
			list = append(list, f)
		}
	}
	return list, nil
}

// shareAbove sums a distribution from its upper end, at the upper edges of the bins.
func shareAbove(species string, run int, x, width, y Numbers) Series {
	s := Series{Label: species, Run: run, X: Numbers{0}, Y: Numbers{1}}
	total := 0.0
	for i := range y {
		total += y[i] * width[i]
	}
	sum := total
	for i := range y {
		sum -= y[i] * width[i]
		s.X = append(s.X, x[i]+width[i]/2)
		s.Y = append(s.Y, math.Max(0, sum/total))
	}
	return s
}

func shareAlt(f *Figure) string {
	var texts []string
	for _, s := range f.Series {
		half := slices.IndexFunc(s.Y, func(v float64) bool { return v <= 0.5 })
		if half >= 0 {
			texts = append(texts, fmt.Sprintf("half of %s arrive above about %s eV",
				f.Name(s.Label, s.Run), short(s.X[half])))
		}
	}
	return f.Title + ": " + strings.Join(texts, "; ") + "."
}

// angleFigures makes a map for each run, electrode and species.
func angleFigures(k Kind, runs []*Run, s Select) ([]Figure, error) {
	var list []Figure
	for _, electrode := range electrodes {
		for _, r := range runs {
			t, err := tableOf(r, "ion_angle")
			if err != nil {
				return nil, err
			}
			if t == nil || !fits(s.Electrode, electrode) {
				continue
			}
			all, err := parts(t, "electrode", "species")
			if err != nil {
				return nil, err
			}
			for _, p := range all {
				if p.keys[0] != electrode || !fits(s.Species, p.keys[1]) {
					continue
				}
				m, err := gridMap(t, p.rows, "energy_eV", "angle_deg", "flux_m2pseVdeg", 1)
				if err != nil {
					return nil, err
				}
				f := Figure{
					ID:   strings.Join([]string{k.ID, electrode, slug(p.keys[1])}, "-"),
					Runs: marks([]*Run{r}),
					Title: fmt.Sprintf("%s of %s, %s electrode", k.Title, p.keys[1],
						electrode),
					X:   Axis{Name: "energy_eV", Label: "energy at impact", Unit: "eV"},
					Y:   Axis{Name: "angle_deg", Label: "angle to the normal", Unit: "deg"},
					Map: m,
				}
				m.Value = Axis{
					Name: "flux_m2pseVdeg", Label: "flux", Unit: "1/(m2 s eV deg)", Log: true,
				}
				trimMap(m)
				f.Alt = mapAlt(&f)
				list = append(list, f)
			}
		}
	}
	return numbered(list, len(runs)), nil
}
