package report

import (
	"bytes"
	"compress/gzip"
	"encoding/base64"
	"encoding/csv"
	"encoding/xml"
	"errors"
	"fmt"
	"image/color"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"ionfall/internal/store"
)

// Goal: every figure of the page is well formed, described, and has its data behind it. Method:
// the page of an invented run with three kinds of ions; the packed CSV is read back.
func TestPageIsComplete(t *testing.T) {
	r := opened(t, "three", store.OK, "Ar+", "H3+", "H2+")
	page, err := Page([]*Run{r})
	if err != nil {
		t.Fatal(err)
	}
	figures, _, err := AllFigures([]*Run{r})
	if err != nil {
		t.Fatal(err)
	}
	if len(figures) < 12 {
		t.Errorf("%d figures, want at least 12", len(figures))
	}
	svgs := regexp.MustCompile(`(?s)<svg.*?</svg>`).FindAll(page, -1)
	if len(svgs) != len(figures) {
		t.Errorf("%d drawings for %d figures", len(svgs), len(figures))
	}
	for _, svg := range svgs {
		if err := xml.Unmarshal(svg, new(struct{})); err != nil {
			t.Errorf("a drawing is not well formed: %v", err)
		}
	}
	for _, f := range figures {
		if len(f.Alt) < len(f.Title)+10 || f.About == "" {
			t.Errorf("%s: no description: %q, %q", f.ID, f.Alt, f.About)
		}
		if f.Map == nil && f.Bars == nil && f.X.Unit == "" && f.X.Name != "period" {
			t.Errorf("%s: no unit on the x axis", f.ID)
		}
		checkData(t, page, &f)
	}
	for _, c := range Cautions() {
		if !bytes.Contains(page, []byte(c)) {
			t.Errorf("the page lacks the caution %q", c)
		}
	}
}

// checkData unpacks the data of a figure from the page.
func checkData(t *testing.T, page []byte, f *Figure) {
	t.Helper()
	place := regexp.MustCompile(`id="d-` + regexp.QuoteMeta(f.ID) + `">([^<]*)<`)
	found := place.FindSubmatch(page)
	if found == nil {
		t.Errorf("%s: no data in the page", f.ID)
		return
	}
	packed, err := base64.RawURLEncoding.DecodeString(string(found[1]))
	if err != nil {
		t.Errorf("%s: %v", f.ID, err)
		return
	}
	z, err := gzip.NewReader(bytes.NewReader(packed))
	if err != nil {
		t.Errorf("%s: %v", f.ID, err)
		return
	}
	data, err := io.ReadAll(z)
	if err != nil {
		t.Errorf("%s: %v", f.ID, err)
	}
	rows, err := csv.NewReader(bytes.NewReader(data)).ReadAll()
	if err != nil || len(rows) < 2 {
		t.Errorf("%s: %d rows, %v", f.ID, len(rows), err)
		return
	}
	for _, row := range rows[1:] {
		if row[0] != f.Runs[0].Name || row[1] != f.Runs[0].Verdict {
			t.Errorf("%s: row %v does not name run and verdict", f.ID, row)
			return
		}
	}
}

// Goal: the page asks nothing of a network. Method: nothing in it refers to anything but itself.
func TestPageIsSelfContained(t *testing.T) {
	page, err := Page([]*Run{opened(t, "alone", store.OK)})
	if err != nil {
		t.Fatal(err)
	}
	refers := regexp.MustCompile(`(?i)\b(?:src|href|action|srcset)="([^"]*)`)
	for _, m := range refers.FindAllSubmatch(page, -1) {
		target := string(m[1])
		if !strings.HasPrefix(target, "#") && !strings.HasPrefix(target, "data:image/png;base64,") {
			t.Errorf("the page refers to %.80q", target)
		}
	}
	for _, word := range []string{"http://", "https://", "@import", "url(", "fetch("} {
		if bytes.Contains(page, []byte(word)) {
			t.Errorf("the page holds %s", word)
		}
	}
	if !bytes.Contains(page, []byte("default-src &#39;none&#39;")) {
		t.Error("no content security policy")
	}
}

// Goal: a result that is not to be used cannot be taken for a sound one in any figure or table.
// Method: the same invented run with both verdicts; each drawing, legend, table cell and CSV row
// of the failed one is marked, none of the sound one.
func TestFailedIsMarkedEverywhere(t *testing.T) {
	for _, verdict := range []string{store.OK, store.Fail} {
		failed := verdict == store.Fail
		r := opened(t, "judged", verdict, "Ar+", "H3+")
		figures, _, err := AllFigures([]*Run{r})
		if err != nil {
			t.Fatal(err)
		}
		for _, f := range figures {
			svg, err := f.SVG()
			if err != nil {
				t.Fatal(err)
			}
			if strings.Contains(svg, `class="stamp"`) != failed ||
				strings.Contains(svg, "not to be used") != failed {
				t.Errorf("%s, verdict %s: stamp missing or wrong", f.ID, verdict)
			}
			for _, s := range f.Series {
				if strings.Contains(f.Name(s.Label, s.Run), "(FAIL)") != failed {
					t.Errorf("%s: name %q of verdict %s", f.ID, f.Name(s.Label, s.Run), verdict)
				}
			}
		}
		page, err := Page([]*Run{r})
		if err != nil {
			t.Fatal(err)
		}
		cells := regexp.MustCompile(`<td[^>]*>[^<]*±[^<]*`).FindAll(page, -1)
		if len(cells) < 10 {
			t.Fatalf("%d cells with values", len(cells))
		}
		for _, cell := range cells {
			if bytes.Contains(cell, []byte("✗")) != failed {
				t.Errorf("verdict %s: cell %s", verdict, cell)
			}
		}
		if got := bytes.Count(page, []byte(`<figure class="failed"`)); failed != (got > 0) ||
			failed && got != len(figures) {
			t.Errorf("verdict %s: %d figures marked of %d", verdict, got, len(figures))
		}
		if bytes.Contains(page, []byte("Not to be used")) != failed {
			t.Errorf("verdict %s: the judgement is missing or wrong", verdict)
		}
	}
}

// Goal: among several runs the failed one is named. Method: two runs overlaid, one of them failed.
func TestFailedAmongOthers(t *testing.T) {
	runs := []*Run{opened(t, "good", store.OK), opened(t, "bad", store.Fail)}
	figures, _, err := AllFigures(runs)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range figures {
		if f.Kind == "phase-field" || f.Kind == "ion-angle" {
			continue // one a run
		}
		svg, err := f.SVG()
		if err != nil {
			t.Fatal(err)
		}
		if !strings.Contains(svg, "verdict FAIL: bad") {
			t.Errorf("%s: the failed run is not named", f.ID)
		}
		for _, s := range f.Series {
			name := f.Name(s.Label, s.Run)
			if strings.Contains(name, "FAIL") != strings.HasPrefix(name, "bad: ") {
				t.Errorf("%s: curve %q", f.ID, name)
			}
		}
	}
	if _, err := Page(runs); err != nil {
		t.Error(err)
	}
}

// Goal: colours survive grey printing and the common colour blindness. Method: the lightness of
// the map rises all the way, also as seen without red or green cones (F. Vienot, H. Brettel and
// J. D. Mollon, Color Res. Appl. 24, 243 (1999): both read red and green as their mean, from
// memory).
func TestMapColors(t *testing.T) {
	lightness := func(c color.NRGBA) float64 {
		return 0.2126*float64(c.R) + 0.7152*float64(c.G) + 0.0722*float64(c.B)
	}
	blind := func(c color.NRGBA) float64 {
		yellow := (float64(c.R) + float64(c.G)) / 2
		return 0.93*yellow + 0.07*float64(c.B)
	}
	for i := range 50 {
		a, b := mapColor(float64(i)/50), mapColor(float64(i+1)/50)
		if lightness(b) <= lightness(a) || blind(b) <= blind(a) {
			t.Errorf("not lighter from %v to %v", a, b)
		}
	}
	if c := mapColor(0.5); max(c.R, c.G, c.B)-min(c.R, c.G, c.B) > 4 {
		t.Errorf("the middle is %v, want grey", c)
	}
}

// Goal: folders that are no results and tables that are damaged are refused in words. Method: one
// of each.
func TestBadFolders(t *testing.T) {
	if _, err := Open(filepath.Join(t.TempDir(), "none")); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("missing folder: %v", err)
	}
	if _, err := Open(t.TempDir()); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("empty folder: %v", err)
	}
	r := opened(t, "damaged", store.OK)
	path := filepath.Join(r.folder, "profiles.parquet")
	if err := os.WriteFile(path, []byte("nothing of the kind"), 0o600); err != nil {
		t.Fatal(err)
	}
	if _, err := Page([]*Run{r}); err == nil || !strings.Contains(err.Error(), "profiles.parquet") {
		t.Errorf("damaged table: %v", err)
	}
}

// Goal: names from files cannot act in the page. Method: a folder and a title that are markup.
func TestMarkupIsText(t *testing.T) {
	r := opened(t, "tags", store.OK, "Ar+")
	const evil = `<script>alert(1)</script>`
	r.Name, r.Case.Title, r.Input = evil, evil, evil
	page, err := Page([]*Run{r})
	if err != nil {
		t.Fatal(err)
	}
	if bytes.Contains(page, []byte(evil)) {
		t.Error("markup from a file stands in the page")
	}
}

func ExampleFindKind() {
	_, err := FindKind("ion-enrgy")
	fmt.Println(err)
	// Output: no figure "ion-enrgy"; did you mean "ion-energy"?
}
