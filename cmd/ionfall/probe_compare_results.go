package main

import (
	"bytes"
	"html/template"
	"maps"
	"slices"

	"ionfall/internal/probe"
	"ionfall/internal/store"
	"ionfall/internal/table"
)

// rowJSON is a compared quantity.
type rowJSON struct {
	Measured  quantityJSON `json:"measured"`
	Simulated quantityJSON `json:"simulated"`
	Sigma     store.Number `json:"difference_sigma"`
}

func rowsJSON(rows []probe.Row) map[string]rowJSON {
	out := map[string]rowJSON{}
	for i := range rows {
		r := &rows[i]
		out[r.Key] = rowJSON{asJSON(r.Measured), asJSON(r.Simulated), store.Number(r.Sigma())}
	}
	return out
}

func comparisonsJSON(list []comparedProbe, analysers []comparedAnalyser) map[string]any {
	probes := []map[string]any{}
	for i := range list {
		o := &list[i]
		probes = append(probes, map[string]any{
			"name": o.Name, "position_m": store.Number(o.Position), "run": o.run,
			"quantities": rowsJSON(o.comparison.Rows), "verdict": o.comparison.Verdict,
			"cautions":               noNil(o.comparison.Cautions),
			"current_rms_sigma":      store.Number(o.comparison.RMS),
			"current_rms_aligned":    store.Number(o.comparison.Aligned),
			"current_points":         o.comparison.Points,
			"simulated_verdict":      o.simulated.Verdict,
			"simulated_distribution": o.simulated.Region,
		})
	}
	ion := []map[string]any{}
	for i := range analysers {
		ion = append(ion, analysers[i].json())
	}
	return map[string]any{"probes": probes, "analysers": ion}
}

// pagePart is a probe or an analyser on the page.
type pagePart struct {
	Name, Text string
	Figures    []template.HTML
}

const comparisonPage = `<!DOCTYPE html>
<html lang="en"><head><meta charset="utf-8"><title>ionfall: measured and simulated</title>
<style>body{font-family:sans-serif;max-width:60em;margin:2em auto;padding:0 1em}
pre{white-space:pre-wrap;background:#f4f4f4;padding:1em}
svg{max-width:100%;height:auto}</style></head>
<body><h1>Measured and simulated</h1>
{{range .}}<section><h2>{{.Name}}</h2><pre>{{.Text}}</pre>
{{range .Figures}}<figure>{{.}}</figure>
{{end}}</section>
{{end}}<p>` + caution + `</p></body></html>
`

// keepComparisons writes tables, figures, JSON and the page.
func keepComparisons(out string, list []comparedProbe, analysers []comparedAnalyser) error {
	return keepFolder(out, func(folder *store.Run) error {
		var parts []pagePart
		meta := map[string]string{"program": "ionfall " + versionText()}
		for i := range list {
			part, err := list[i].keep(folder, len(list) > 1, meta)
			if err != nil {
				return err
			}
			parts = append(parts, *part)
		}
		for i := range analysers {
			part, err := analysers[i].keep(folder, len(analysers) > 1, meta)
			if err != nil {
				return err
			}
			parts = append(parts, *part)
		}
		if len(list) > 0 {
			if err := folder.WriteTable(comparisonTable(list), meta); err != nil {
				return err
			}
		}
		page, err := renderPage(parts)
		if err != nil {
			return err
		}
		if err := folder.WriteFile("comparison.html", page); err != nil {
			return err
		}
		return folder.WriteJSON("comparison.json", comparisonsJSON(list, analysers))
	})
}

func comparisonTable(list []comparedProbe) *table.Table {
	var labels []string
	var comparisons []*probe.Comparison
	var positions []float64
	for i := range list {
		labels = append(labels, list[i].Name)
		comparisons = append(comparisons, list[i].comparison)
		positions = append(positions, list[i].Position)
	}
	return probe.ComparisonTable(labels, comparisons, positions)
}

func (o *comparedProbe) keep(folder *store.Run, several bool, meta map[string]string) (
	*pagePart, error,
) {
	prefix := ""
	if several {
		prefix = columnPart(o.Name) + "_"
	}
	if err := keepReduction(folder, &o.reducedProbe, prefix); err != nil {
		return nil, err
	}
	for _, t := range []*table.Table{o.comparison.Characteristic, o.comparison.EEPF} {
		if t == nil {
			continue
		}
		t.Name = prefix + t.Name
		if err := folder.WriteTable(t, meta); err != nil {
			return nil, err
		}
	}
	figures, err := o.comparison.Figures()
	if err != nil {
		return nil, err
	}
	return keepPart(folder, prefix, o.Name, o.compareText(), figures)
}

// keepPart writes figures and returns the part of the page that shows them.
func keepPart(folder *store.Run, prefix, name, text string, figures map[string][]byte) (
	*pagePart, error,
) {
	part := &pagePart{Name: name, Text: text}
	for _, file := range slices.Sorted(maps.Keys(figures)) {
		if err := folder.WriteFile(prefix+file, figures[file]); err != nil {
			return nil, err
		}
		svg := figures[file]
		if i := bytes.Index(svg, []byte("<svg")); i >= 0 {
			svg = svg[i:]
		}
		// The figures are our own: their labels come from the program alone.
		part.Figures = append(part.Figures, template.HTML(svg))
	}
	return part, nil
}

func renderPage(parts []pagePart) ([]byte, error) {
	t, err := template.New("page").Parse(comparisonPage)
	if err != nil {
		return nil, err
	}
	var b bytes.Buffer
	if err := t.Execute(&b, parts); err != nil {
		return nil, err
	}
	return b.Bytes(), nil
}
