package crosssections

import (
	"fmt"
	"path"
	"slices"
	"strings"

	"go.yaml.in/yaml/v4"
)

// takeIons adds the ion collisions of another gas: of its ions that the new gas has, too, or else
// those of its own ion for the own ion of the new gas.
func (w *gasWriter) takeIons(from *Gas) {
	renamed := w.ionPairs(from)
	if len(renamed) == 0 {
		w.addHint(0, 0, "ions", "no ion to give the collisions of "+from.Name+" to",
			"a gas with the ion "+w.set.Species+"+", "")
		return
	}
	n := 0
	for i := range from.IonNeutral {
		p := &from.IonNeutral[i]
		projectile, wanted := renamed[p.Projectile]
		if !wanted {
			continue
		}
		n++
		file := fmt.Sprintf("ion-%02d-%s.csv", n, p.Kind)
		table := TableFile{
			What:  projectile + " on " + w.set.Name + ", " + p.Kind.String(),
			Frame: p.Frame, Source: p.Source, Table: p.Table,
		}
		note := "Taken over from " + from.Name + ", " + p.Name + "."
		if projectile != p.Projectile || w.set.Species != from.Name {
			if table.Source.Status != "memory" { // which is the weaker
				table.Source.Status = "derived"
			}
			note += " It is that of another gas: an assumption."
		}
		w.files[path.Join(w.set.Name, file)] = tableText(&table, note)
		w.gas.Ion = append(w.gas.Ion, writtenProcess{
			Name: projectile + " " + p.Kind.String(), Kind: p.Kind.String(), Projectile: projectile,
			Threshold: p.Threshold, Products: w.renameProducts(p, from, projectile), File: file,
		})
	}
	w.uniqueNames()
	w.gas.Note += " Ion collisions taken over from " + from.Name + "."
}

// ionPairs are the ions of the other gas and those of the new one that stand in their place.
func (w *gasWriter) ionPairs(from *Gas) map[string]string {
	renamed := map[string]string{}
	own := w.set.Species + "+"
	for _, ion := range w.gas.Ions {
		if _, same := from.Ion(ion.Name); same {
			renamed[ion.Name] = ion.Name
		} else if ion.Name == own || len(w.gas.Ions) == 1 {
			for _, other := range from.Ions {
				if other.Charge == ion.Charge && strings.TrimRight(other.Name, "+-") == from.Name {
					renamed[other.Name] = ion.Name
				}
			}
		}
	}
	return renamed
}

// renameProducts are the products with the names of the new gas and its ion.
func (w *gasWriter) renameProducts(p *Process, from *Gas, projectile string) []string {
	list := slices.Clone(p.Products)
	for i, product := range list {
		switch product {
		case p.Projectile:
			list[i] = projectile
		case from.Name:
			list[i] = w.set.Species
		}
	}
	return list
}

// uniqueNames numbers ion processes of one name.
func (w *gasWriter) uniqueNames() {
	seen := map[string]int{}
	for i := range w.gas.Ion {
		name := w.gas.Ion[i].Name
		if seen[name]++; seen[name] > 1 {
			w.gas.Ion[i].Name = fmt.Sprintf("%s (%d)", name, seen[name])
		}
	}
}

// yaml is the text of gas.yaml.
func (w *gasWriter) yaml() ([]byte, error) {
	text, err := yaml.Dump(&w.gas, yaml.WithLineWidth(-1))
	if err != nil {
		return nil, fmt.Errorf("writing %s: %w", GasFileName, err)
	}
	return text, nil
}
