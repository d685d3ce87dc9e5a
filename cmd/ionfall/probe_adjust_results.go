package main

import (
	"fmt"

	"ionfall/internal/probe"
	"ionfall/internal/progress"
	"ionfall/internal/store"
	"ionfall/internal/table"
)

// text is what the command prints.
func (a *adjustment) text(post *probe.Posterior) string {
	p := a.problem
	rows := [][]string{{"free input", "", "case", "prior", "posterior", "95 % interval"}}
	for i := range p.Inputs {
		f := &p.Inputs[i]
		mean, sd := probe.Moments(post.Draws, i)
		rows = append(rows, []string{
			f.Path, f.Unit, progress.Digits(f.Nominal, 4), f.PriorText(), progress.WithError(mean, sd),
			fmt.Sprintf("%.4g to %.4g", probe.Quantile(post.Draws, i, 0.025),
				probe.Quantile(post.Draws, i, 0.975)),
		})
	}
	text := align(rows)
	for i := range p.Inputs {
		for j := range i {
			text += fmt.Sprintf("correlation of %s and %s: %.2f\n", p.Inputs[j].Path, p.Inputs[i].Path,
				probe.Correlation(post.Draws, j, i))
		}
	}
	rows = [][]string{{"prediction", "", "before", "after"}}
	for i := range p.Predicted {
		q := &p.Predicted[i]
		m0, s0 := probe.Moments(post.Prior, len(p.Inputs)+i)
		m1, s1 := probe.Moments(post.Draws, len(p.Inputs)+i)
		rows = append(rows, []string{
			q.Label, q.Unit, progress.WithError(m0, s0), progress.WithError(m1, s1),
		})
	}
	text += "\n" + align(rows) + "\n" + post.Verdict() + "\n"
	for _, f := range post.Findings() {
		text += "caution: " + f + "\n"
	}
	text += fmt.Sprintf("note: %d data, %d runs, best chi-square %.3g (larger by chance in %.2g of "+
		"cases); the sample is worth %.0f draws\n", len(p.Data), len(p.Points), post.BestChi2,
		post.Chance, post.Effective)
	text += fmt.Sprintf("note: a model error of %.2g %% is assumed; errors are standard deviations, "+
		"before: of the prior\nresults: %s\n\n%s\n", 100*p.ModelError, a.out, caution)
	return text
}

// json is the same in JSON.
func (a *adjustment) json(post *probe.Posterior) map[string]any {
	p := a.problem
	value := func(draws [][]float64, column int, unit string) map[string]any {
		mean, sd := probe.Moments(draws, column)
		return map[string]any{
			"value": store.Number(mean), "se": store.Number(sd), "unit": unit,
			"interval95": []store.Number{
				store.Number(probe.Quantile(draws, column, 0.025)),
				store.Number(probe.Quantile(draws, column, 0.975)),
			},
		}
	}
	inputs, predicted := map[string]any{}, map[string]any{}
	correlations := map[string]store.Number{}
	for i := range p.Inputs {
		f := &p.Inputs[i]
		inputs[f.Path] = map[string]any{
			"prior": f.PriorText(), "case": store.Number(f.Nominal),
			"posterior": value(post.Draws, i, f.Unit),
		}
		for j := range i {
			correlations[p.Inputs[j].Path+","+f.Path] = store.Number(
				probe.Correlation(post.Draws, j, i))
		}
	}
	for i := range p.Predicted {
		q := &p.Predicted[i]
		predicted[q.Key] = map[string]any{
			"before": value(post.Prior, len(p.Inputs)+i, q.Unit),
			"after":  value(post.Draws, len(p.Inputs)+i, q.Unit),
		}
	}
	return map[string]any{
		"verdict": post.Verdict(), "fits": post.Fits(), "cautions": noNil(post.Findings()),
		"inputs": inputs, "correlations": correlations, "predictions": predicted,
		"best_chi_square": store.Number(post.BestChi2), "chance": store.Number(post.Chance),
		"data": len(p.Data), "runs": len(p.Points), "model_error": p.ModelError,
		"effective_draws": store.Number(post.Effective),
	}
}

// keep writes the posterior, the numbers, and the case with the means of the posterior.
func (a *adjustment) keep(post *probe.Posterior) error {
	p := a.problem
	t := table.New("posterior", "draws of the free inputs and of the predictions, equal weights")
	column := func(k int) []float64 {
		list := make([]float64, len(post.Draws))
		for i, d := range post.Draws {
			list[i] = d[k]
		}
		return list
	}
	means := make([]float64, len(p.Inputs))
	for i := range p.Inputs {
		means[i], _ = probe.Moments(post.Draws, i)
		t.AddFloat("input_"+fmt.Sprint(i), "", p.Inputs[i].Path+" "+p.Inputs[i].Unit, column(i))
	}
	for i := range p.Predicted {
		t.AddFloat(p.Predicted[i].Key, p.Predicted[i].Unit, p.Predicted[i].Label,
			column(len(p.Inputs)+i))
	}
	// The accuracy of the case as it was given.
	resolved, err := a.input.Resolved()
	if err != nil {
		return err
	}
	adjusted, err := probe.With(resolved, p.Inputs, means)
	if err != nil {
		return err
	}
	return keepFolder(a.out, func(folder *store.Run) error {
		meta := map[string]string{"program": "ionfall " + a.version}
		if err := folder.WriteTable(t, meta); err != nil {
			return err
		}
		if err := folder.WriteFile("adjusted.yaml", adjusted); err != nil {
			return err
		}
		return folder.WriteJSON("adjust.json", a.json(post))
	})
}
