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
	"strings"

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
	*Sheet
	CSS      template.CSS
	JS       template.JS
	Policy   string
	Sections []section
	Absent   []string
	Cautions []string
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
	words, err := NewSheet(runs)
	if err != nil {
		return nil, err
	}
	css := styleSheet()
	s := &sheet{
		Sheet: words, CSS: cssText(css), JS: scriptText(pageJS),
		Policy: policy(css, pageJS), Absent: absent, Cautions: Cautions(),
	}
	if s.Sections, err = sections(figures); err != nil {
		return nil, fmt.Errorf("report: %w", err)
	}
	return fill("page", s)
}

func fill(name string, s any) ([]byte, error) {
	functions := template.FuncMap{
		"unit": prettyUnit, "mark": VerdictMark, "anchor": slug,
	}
	t, err := template.New("page").Funcs(functions).Parse(pageHTML)
	if err != nil {
		return nil, fmt.Errorf("report: %w", err)
	}
	var b bytes.Buffer
	if err := t.ExecuteTemplate(&b, name, s); err != nil {
		return nil, fmt.Errorf("report: %w", err)
	}
	return b.Bytes(), nil
}

// cssText and scriptText say that these texts are our own.
func cssText(s string) template.CSS   { return template.CSS(s) }
func scriptText(s string) template.JS { return template.JS(s) }

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

// styleSheet is that of the page.
func styleSheet() string { return curveStyles() + pageCSS }

// Styles are those of the page and its figures, for the viewer.
func Styles() string { return styleSheet() }

// curveStyles are the colours and dashes of the curves, for light and dark.
func curveStyles() string {
	light, dark := curveColors()
	var b strings.Builder
	b.WriteString(":root{")
	for i, c := range light {
		fmt.Fprintf(&b, "--c%d:%s;", i, c)
	}
	b.WriteString("}\n")
	var night strings.Builder
	for i, c := range dark {
		fmt.Fprintf(&night, "--c%d:%s;", i, c)
	}
	fmt.Fprintf(&b, "@media screen and (prefers-color-scheme:dark)"+
		"{:root:not([data-theme=\"light\"]){%[1]s}}\n:root[data-theme=\"dark\"]{%[1]s}\n", &night)
	for i := range light {
		fmt.Fprintf(&b, ".c%d{stroke:var(--c%d)}.f%d{fill:var(--c%d)}\n", i, i, i, i)
	}
	for i, d := range dashes() {
		if d != "" {
			fmt.Fprintf(&b, ".d%d{stroke-dasharray:%s}\n", i, d)
		}
	}
	return b.String()
}

func sections(figures []Figure) ([]section, error) {
	groups := map[string]string{"scan": "Results over the inputs"}
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
	// This alphabet needs no escapes in a page.
	return base64.RawURLEncoding.EncodeToString(b.Bytes()), nil
}
