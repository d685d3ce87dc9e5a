package report

import (
	"bytes"
	"errors"
	"image/png"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/inputerr"
	"ionfall/internal/store"
)

// Goal: every figure can be drawn for a paper in every format, in the width asked for. Method: all
// of an invented run; the PNG is decoded and must hold more than one colour.
func TestEveryFigureForPaper(t *testing.T) {
	figures, _, err := AllFigures([]*Run{opened(t, "paper", store.OK, "Ar+", "H3+")})
	if err != nil {
		t.Fatal(err)
	}
	for i := range figures {
		f := &figures[i]
		for format, magic := range map[string]string{"svg": "<?xml", "pdf": "%PDF-"} {
			data, err := f.Draw(Paper{Format: format, Width: ColumnWidth})
			if err != nil || !bytes.HasPrefix(data, []byte(magic)) {
				t.Errorf("%s as %s: %v, %.20q", f.ID, format, err, data)
			}
		}
	}
	data, err := figures[0].Draw(Paper{Format: "png", Width: ColumnWidth})
	if err != nil {
		t.Fatal(err)
	}
	picture, err := png.Decode(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	want := ColumnWidth / 25.4 * paperDPI
	if got := float64(picture.Bounds().Dx()); math.Abs(got-want) > 2 {
		t.Errorf("%g pixels wide, want %g", got, want)
	}
}

// Goal: the stamp of a failed run is in the drawing for a paper. Method: the text is in the SVG of
// the failed run and not in that of the sound one.
func TestPaperIsStamped(t *testing.T) {
	for _, verdict := range []string{store.OK, store.Fail} {
		figures, _, err := AllFigures([]*Run{opened(t, "stamped", verdict)})
		if err != nil {
			t.Fatal(err)
		}
		for i := range figures {
			data, err := figures[i].Draw(Paper{Format: "svg", Width: ColumnWidth})
			if err != nil {
				t.Fatal(err)
			}
			for _, format := range []string{"pdf"} {
				if _, err := figures[i].Draw(Paper{Format: format, Width: 60}); err != nil {
					t.Errorf("%s as %s: %v", figures[i].ID, format, err)
				}
			}
			if bytes.Contains(data, []byte("not to be used")) != (verdict == store.Fail) {
				t.Errorf("%s, verdict %s: stamp missing or wrong", figures[i].ID, verdict)
			}
		}
	}
}

// Goal: measured points are read with their errors, and wrong files are refused with the place.
// Method: one good file, and each fault.
func TestMeasured(t *testing.T) {
	s, err := readMeasured(t, "energy, flux, error\n# a comment\n1, 2, 0.1\n3, 4\n")
	if err != nil {
		t.Fatal(err)
	}
	if len(s.X) != 2 || s.Y[1] != 4 || s.SE[0] != 0.1 || !math.IsNaN(s.SE[1]) {
		t.Errorf("got %+v", s)
	}
	for content, want := range map[string]string{
		"1,2\n3,x\n":         `:2:3: got "x", want a number`,
		"1,2,-1\n":           `:1:5: got "-1", want an error that is a number`,
		"1\n":                `:1:1: got 1 columns, want x, y`,
		"a,b\nc,d\n":         `:2:1: got "c", want a number`,
		"1,2\n\"3,4\n":       `:2:`,
		"":                   `want rows of x, y`,
		"1,2\n3,Inf\n":       `:2:3: got "Inf", want a number`,
		"x,y\n1,2,3,4\n":     `:2:1: got 4 columns`,
		"# only a comment\n": `want rows of x, y`,
	} {
		_, err := readMeasured(t, content)
		var place *inputerr.Error
		if !errors.As(err, &place) || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: got %v, want %s", content, err, want)
		}
	}
	if _, err := ReadMeasured(filepath.Join(t.TempDir(), "none.csv")); err == nil {
		t.Error("a missing file is read")
	}
}

func readMeasured(t *testing.T, content string) (Series, error) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "points.csv")
	if err := os.WriteFile(path, []byte(content), 0o600); err != nil {
		t.Fatal(err)
	}
	return ReadMeasured(path)
}
