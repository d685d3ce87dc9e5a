package report

import (
	"bytes"
	"compress/gzip"
	"crypto/sha256"
	_ "embed" // the page's template, style and script
	"encoding/base64"
	"errors"
	"fmt"
	"html/template"
	"slices"
	"strings"

	"ionfall/internal/progress"
	"ionfall/internal/store"
)

//go:embed assets/page.html
var pageHTML string

//go:embed assets/page.css
var pageCSS string

//go:embed assets/page.js
var pageJS string

// drawn is a figure as the page holds it.
type drawn struct {
	Figure
	Picture template.HTML
	Data    string // its CSV, packed
	Rows    int
}

// section is a group of figures.
type section struct {
	Title, ID string
	Figures   []drawn
}

// sheet is what the template is filled with.
type sheet struct {
	CSS      template.CSS
	JS       template.JS
	Policy   string
	Title    string
	Runs     []runSheet
	Answers  Answers
	Sections []section
	Absent   []string
	Several  bool
	Failed   []string
	Cautions []string
}

// runSheet is what the page tells of one run.
type runSheet struct {
	*Run
	Asked      []pair
	Headline   []headline
	Checks     []checkSheet
	Judgement  string
	Indicators []Indicator
	Provenance []pair
}

type pair struct{ Name, Text string }

// headline is one of the numbers that the page opens with.
type headline struct{ Name, Text, Where string }

type checkSheet struct {
	store.Check
	Words, Number, Limit string
}

// Page is the report of one run, or of several side by side.
func Page(runs []*Run) ([]byte, error) {
	if len(runs) == 0 {
		return nil, errors.New("report: no runs")
	}
	figures, absent, err := AllFigures(runs)
	if err != nil {
		return nil, fmt.Errorf("report: %w", err)
	}
	s := &sheet{
		CSS: template.CSS(styleSheet()), JS: template.JS(pageJS), Policy: policy(styleSheet(), pageJS),
		Title: runs[0].Title(), Answers: NewAnswers(runs), Absent: absent,
		Several: len(runs) > 1, Cautions: Cautions(),
	}
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
	if s.Sections, err = sections(figures); err != nil {
		return nil, fmt.Errorf("report: %w", err)
	}
	return fill(s)
}

func fill(s *sheet) ([]byte, error) {
	functions := template.FuncMap{
		"unit": prettyUnit, "mark": VerdictMark, "anchor": slug,
	}
	t, err := template.New("page").Funcs(functions).Parse(pageHTML)
	if err != nil {
		return nil, fmt.Errorf("report: %w", err)
	}
	var b bytes.Buffer
	if err := t.Execute(&b, s); err != nil {
		return nil, fmt.Errorf("report: %w", err)
	}
	return b.Bytes(), nil
}

// VerdictMark is a sign and a word for a verdict: colour alone says nothing to some.
func VerdictMark(verdict string) string {
	switch verdict {
	case store.OK:
		return "✓ ok"
	case store.Warn:
		return "! warn"
	case store.Fail:
		return "✗ FAIL"
	}
	return "… " + verdict
}

// Cautions are what every page says.
func Cautions() []string {
	return []string{
		"A simulated value is never an interlock setting, and no safety margin follows from it.",
		"Silane ignites in air by itself and is toxic; hydrogen explodes; RF voltages burn; vacuum " +
			"vessels implode.",
		"Local codes and licensed practice decide how such a chamber is built and run.",
	}
}

// policy lets the page use what it holds and nothing else.
func policy(css, js string) string {
	hash := func(text string) string {
		sum := sha256.Sum256([]byte(text))
		return "'sha256-" + base64.StdEncoding.EncodeToString(sum[:]) + "'"
	}
	return "default-src 'none'; img-src data:; base-uri 'none'; form-action 'none'; style-src " +
		hash(css) + "; script-src " + hash(js)
}

// styleSheet is the style sheet with the colours of the curves.
func styleSheet() string {
	light, dark := curveColors()
	var b strings.Builder
	b.WriteString(":root{")
	for i, c := range light {
		fmt.Fprintf(&b, "--c%d:%s;", i, c)
	}
	b.WriteString("}\n@media screen and (prefers-color-scheme:dark){:root{")
	for i, c := range dark {
		fmt.Fprintf(&b, "--c%d:%s;", i, c)
	}
	b.WriteString("}}\n")
	for i := range light {
		fmt.Fprintf(&b, ".c%d{stroke:var(--c%d)}.f%d{fill:var(--c%d)}\n", i, i, i, i)
	}
	for i, d := range dashes() {
		if d != "" {
			fmt.Fprintf(&b, ".d%d{stroke-dasharray:%s}\n", i, d)
		}
	}
	return b.String() + pageCSS
}

func sections(figures []Figure) ([]section, error) {
	groups := map[string]string{}
	for _, k := range Kinds() {
		groups[k.ID] = k.group
	}
	var list []section
	for i := range figures {
		f := &figures[i]
		picture, err := f.SVG()
		if err != nil {
			return nil, err
		}
		data, err := f.CSV()
		if err != nil {
			return nil, err
		}
		packed, err := pack(data)
		if err != nil {
			return nil, err
		}
		title := groups[f.Kind]
		if len(list) == 0 || list[len(list)-1].Title != title {
			list = append(list, section{Title: title, ID: slug(title)})
		}
		last := &list[len(list)-1]
		last.Figures = append(last.Figures, drawn{
			Figure: *f, Picture: template.HTML(picture), Data: packed,
			Rows: bytes.Count(data, []byte("\n")) - 1,
		})
	}
	return list, nil
}

// pack compresses data for a text element.
func pack(data []byte) (string, error) {
	var b bytes.Buffer
	w, err := gzip.NewWriterLevel(&b, gzip.BestCompression)
	if err != nil {
		return "", err
	}
	if _, err := w.Write(data); err != nil {
		return "", err
	}
	if err := w.Close(); err != nil {
		return "", err
	}
	return base64.StdEncoding.EncodeToString(b.Bytes()), nil
}

func newRunSheet(r *Run) (runSheet, error) {
	indicators, err := r.Indicators()
	if err != nil {
		return runSheet{}, err
	}
	s := runSheet{
		Run: r, Asked: r.asked(), Headline: r.headlines(), Judgement: r.judgement(),
		Indicators: indicators, Provenance: flatPairs("", r.Summary.Provenance),
	}
	for _, c := range r.Summary.Checks {
		s.Checks = append(s.Checks, checkSheet{
			Check: c, Words: strings.ReplaceAll(c.Name, "_", " "),
			Number: typeset(progress.Digits(c.Value, 3)), Limit: typeset(progress.Digits(c.Bound, 3)),
		})
	}
	worse := []string{store.Fail, store.Warn, store.OK}
	slices.SortStableFunc(s.Checks, func(a, b checkSheet) int {
		return slices.Index(worse, a.Verdict) - slices.Index(worse, b.Verdict)
	})
	return s, nil
}
