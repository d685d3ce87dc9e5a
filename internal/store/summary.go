package store

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"slices"
	"strings"

	"ionfall/internal/table"
)

// Verdicts of checks and of the whole, from best to worst.
const (
	OK   = "ok"
	Warn = "warn"
	Fail = "fail"
)

// Summary is the content of summary.json.
type Summary struct {
	Verdict    string         `json:"verdict"` // the worst of the checks
	Checks     []Check        `json:"checks"`
	Results    map[string]any `json:"results"` // nested maps whose leaves are Values
	Provenance map[string]any `json:"provenance"`
	References []Reference    `json:"references"`
}

// Check is one measure of trust: a number against its bound.
type Check struct {
	Name    string
	Value   float64
	Bound   float64
	Verdict string // ok, warn or fail
	Text    string // what it means, for people
}

// Reference is a publication that the run relied on, and for what.
type Reference struct {
	Key      string `json:"key"`
	Citation string `json:"citation"`
	Why      string `json:"why"`
}

// checkJSON is the form of a Check in files.
type checkJSON struct {
	Name    string `json:"name"`
	Value   Number `json:"value"`
	Bound   Number `json:"bound"`
	Verdict string `json:"verdict"`
	Text    string `json:"text"`
}

// MarshalJSON writes numbers that are not finite as null.
func (c Check) MarshalJSON() ([]byte, error) {
	return compact(checkJSON{c.Name, Number(c.Value), Number(c.Bound), c.Verdict, c.Text})
}

// UnmarshalJSON reads null as NaN.
func (c *Check) UnmarshalJSON(b []byte) error {
	var j checkJSON
	if err := json.Unmarshal(b, &j); err != nil {
		return err
	}
	*c = Check{j.Name, float64(j.Value), float64(j.Bound), j.Verdict, j.Text}
	return nil
}

// MarshalJSON writes empty lists and maps for absent ones, and null for numbers not finite.
func (s Summary) MarshalJSON() ([]byte, error) {
	type plain Summary // without this method
	p := plain(s)
	if p.Checks == nil {
		p.Checks = []Check{}
	}
	if p.References == nil {
		p.References = []Reference{}
	}
	p.Results = mapValues(orEmpty(s.Results), finite)
	p.Provenance = mapValues(orEmpty(s.Provenance), finite)
	return compact(p)
}

func orEmpty(m map[string]any) map[string]any {
	if m == nil {
		return map[string]any{}
	}
	return m
}

// compact encodes v, leaving <, > and & as they are: the files are not for web pages.
func compact(v any) ([]byte, error) {
	var b bytes.Buffer
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	err := enc.Encode(v)
	return b.Bytes(), err
}

// UnmarshalJSON reads the leaves of the results as Values.
func (s *Summary) UnmarshalJSON(b []byte) error {
	type plain Summary
	if err := json.Unmarshal(b, (*plain)(s)); err != nil {
		return err
	}
	raw := struct {
		Results json.RawMessage `json:"results"`
	}{}
	if err := json.Unmarshal(b, &raw); err != nil {
		return err
	}
	if raw.Results == nil {
		return errors.New("summary without results")
	}
	results, err := readResults("results", raw.Results)
	s.Results = results
	return err
}

// readResults reads nested objects whose leaves are Values.
func readResults(path string, b []byte) (map[string]any, error) {
	var object map[string]json.RawMessage
	if err := json.Unmarshal(b, &object); err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	out := make(map[string]any, len(object))
	for key, part := range object {
		place := path + "." + key
		var inner map[string]json.RawMessage
		if err := json.Unmarshal(part, &inner); err != nil || inner == nil {
			return nil, fmt.Errorf("%s: want an object, got %s", place, part)
		}
		if isValue(inner) {
			var v Value
			if err := json.Unmarshal(part, &v); err != nil {
				return nil, fmt.Errorf("%s: %w", place, err)
			}
			out[key] = v
			continue
		}
		nested, err := readResults(place, part)
		if err != nil {
			return nil, err
		}
		out[key] = nested
	}
	return out, nil
}

// Result is one leaf of the results under its dotted path.
type Result struct {
	Path string
	Value
}

// Flatten returns the leaves of the results in the order of their paths, and every fault of the
// results: a leaf that is no Value, a name that cannot be a part of a path, a unit that is not the
// one that the path states.
func (s *Summary) Flatten() ([]Result, error) {
	results, errs := flatten(nil, "", s.Results)
	slices.SortFunc(results, func(a, b Result) int { return strings.Compare(a.Path, b.Path) })
	slices.SortFunc(errs, func(a, b error) int { return strings.Compare(a.Error(), b.Error()) })
	return results, errors.Join(errs...)
}

func flatten(results []Result, prefix string, m map[string]any) ([]Result, []error) {
	var errs []error
	for key, part := range m {
		path := prefix + key
		if key == "" || strings.ContainsAny(key, ". \t\n") {
			errs = append(errs, fmt.Errorf("results: %q in %q cannot be a part of a path",
				key, path))
			continue
		}
		switch part := part.(type) {
		case Value:
			if unit := table.UnitOf(path); unit != part.Unit {
				errs = append(errs, fmt.Errorf("results: %s has the unit %q, its name says %q",
					path, part.Unit, unit))
			}
			results = append(results, Result{path, part})
		case map[string]any:
			inner, innerErrs := flatten(results, path+".", part)
			results, errs = inner, append(errs, innerErrs...)
		default:
			errs = append(errs, fmt.Errorf("results: %s is a %T, want a Value or a map",
				path, part))
		}
	}
	return results, errs
}

// Lookup returns the result of a dotted path.
func (s *Summary) Lookup(path string) (Value, bool) {
	var part any = s.Results
	for key := range strings.SplitSeq(path, ".") {
		m, ok := part.(map[string]any)
		if !ok {
			return Value{}, false
		}
		part = m[key]
	}
	v, ok := part.(Value)
	return v, ok
}

// Scalars returns the results as the table of scalars.parquet.
func (s *Summary) Scalars() (*table.Table, error) {
	results, err := s.Flatten()
	if err != nil {
		return nil, err
	}
	n := len(results)
	path, unit := make([]string, n), make([]string, n)
	value, se := make([]float64, n), make([]float64, n)
	for i, r := range results {
		path[i], unit[i] = r.Path, r.Unit
		value[i], se[i] = r.Value.Value, r.SE
	}
	t := table.New("scalars", "every result of the summary, a row each")
	t.AddText("path", "name of the result in the summary", path)
	t.AddFloat("value", "", "value, in the unit of its row", value)
	t.AddFloat("se", "", "standard error of the value", se)
	t.AddText("unit", "unit of value and standard error", unit)
	return t, nil
}

// WriteSummary writes summary.json and, from the same results, scalars.parquet.
func (r *Run) WriteSummary(s *Summary, meta map[string]string) error {
	scalars, err := s.Scalars()
	if err != nil {
		return err
	}
	if err := r.WriteJSON(SummaryFile, s); err != nil {
		return err
	}
	return r.WriteTable(scalars, meta)
}

// ReadSummary reads the summary of a results folder.
func ReadSummary(path string) (*Summary, error) {
	s := &Summary{}
	if err := ReadJSON(path, s); err != nil {
		return nil, err
	}
	return s, nil
}
