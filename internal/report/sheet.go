package report

import (
	"fmt"
	"slices"
	"strings"

	"ionfall/internal/progress"
	"ionfall/internal/store"
)

// Sheet is what is said of runs in words and numbers.
type Sheet struct {
	Title   string
	Runs    []RunSheet
	Answers Answers
	Several bool
	Failed  []string // the runs that are not to be used
}

// RunSheet is what is said of one run.
type RunSheet struct {
	Name, Title, Verdict, Judgement, Input string
	Asked                                  []Pair
	Headline                               []Headline
	Checks                                 []CheckSheet
	Indicators                             []Indicator
	Beside                                 []BesideSheet
	BesideLost                             string // why there are none, if there should be
	Provenance                             []Pair
	References                             []store.Reference
	Results                                []Pair // every one, under its path
}

// Pair is a name and what is said of it.
type Pair struct{ Name, Text string }

// Headline is one of the numbers that the page opens with.
type Headline struct{ Name, Text, Where string }

// CheckSheet is a check in words.
type CheckSheet struct{ Name, Verdict, Number, Limit, Text string }

// NewSheet says what there is to say of one run or several.
func NewSheet(runs []*Run) (*Sheet, error) {
	s := &Sheet{Title: runs[0].Title(), Answers: NewAnswers(runs), Several: len(runs) > 1}
	if s.Several {
		s.Title = fmt.Sprintf("%d runs side by side", len(runs))
	}
	for _, r := range runs {
		one, err := newRunSheet(r)
		if err != nil {
			return nil, fmt.Errorf("report of %s: %w", r.Name, err)
		}
		s.Runs = append(s.Runs, one)
		if r.Verdict() == store.Fail {
			s.Failed = append(s.Failed, r.Name)
		}
	}
	return s, nil
}

func newRunSheet(r *Run) (RunSheet, error) {
	indicators, err := r.Indicators()
	if err != nil {
		return RunSheet{}, err
	}
	s := RunSheet{
		Name: r.Name, Title: r.Title(), Verdict: r.Verdict(), Input: r.Input,
		References: r.Summary.References, Asked: r.asked(), Headline: r.headlines(),
		Judgement:  r.judgement(),
		Indicators: indicators, Provenance: flatPairs("", r.Summary.Provenance),
	}
	for _, c := range r.Summary.Checks {
		s.Checks = append(s.Checks, CheckSheet{
			Name: strings.ReplaceAll(c.Name, "_", " "), Verdict: c.Verdict, Text: c.Text,
			Number: typeset(progress.Digits(c.Value, 3)),
			Limit:  typeset(progress.Digits(c.Bound, 3)),
		})
	}
	s.Beside, s.BesideLost = r.besideSheets()
	all, err := r.Summary.Flatten()
	if err != nil {
		return RunSheet{}, err
	}
	for _, v := range all {
		text := estimate(v.Value.Value, v.SE, v.Unit)
		if r.Verdict() == store.Fail {
			text = "✗ " + text
		}
		s.Results = append(s.Results, Pair{v.Path, text})
	}
	worse := []string{store.Fail, store.Warn, store.OK}
	slices.SortStableFunc(s.Checks, func(a, b CheckSheet) int {
		return slices.Index(worse, a.Verdict) - slices.Index(worse, b.Verdict)
	})
	return s, nil
}
