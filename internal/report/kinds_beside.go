package report

import "fmt"

// besideKinds show measurements beside the run that they were compared with.
func besideKinds() []Kind {
	return []Kind{{
		ID: "measurements", Title: "Measured and simulated", group: groupBeside, build: besideFigures,
		About: "What was measured and what the same instrument would show in the simulated plasma.",
	}}
}

func besideFigures(k Kind, runs []*Run, _ Select) ([]Figure, error) {
	var list []Figure
	for _, r := range runs {
		for _, b := range r.beside() {
			for _, f := range b.Figures {
				f.ID = fmt.Sprintf("%s-%d", k.ID, len(list)+1)
				f.Title = b.Name + ": " + f.Title
				if len(runs) > 1 {
					f.Title += ", " + r.Name
				}
				f.Runs = marks([]*Run{r})
				f.Alt = altOf(&f)
				list = append(list, f)
			}
		}
	}
	return list, nil
}
