package report

import (
	"encoding/json"
	"fmt"
	"math"
	"strconv"
	"strings"

	"ionfall/internal/store"
)

// Numbers are values for JSON: six digits, and null where there is none.
type Numbers []float64

// MarshalJSON writes six significant digits.
func (n Numbers) MarshalJSON() ([]byte, error) {
	b := []byte{'['}
	for i, v := range n {
		if i > 0 {
			b = append(b, ',')
		}
		if math.IsNaN(v) || math.IsInf(v, 0) {
			b = append(b, "null"...)
			continue
		}
		b = strconv.AppendFloat(b, v, 'g', 6, 64)
	}
	return append(b, ']'), nil
}

// UnmarshalJSON takes null for NaN.
func (n *Numbers) UnmarshalJSON(src []byte) error {
	var list []store.Number
	if err := json.Unmarshal(src, &list); err != nil {
		return err
	}
	*n = nil
	for _, v := range list {
		*n = append(*n, float64(v))
	}
	return nil
}

// Axis is a direction of a figure.
type Axis struct {
	Name  string `json:"name"`  // as a column, with the unit at its end
	Label string `json:"label"` // for people
	Unit  string `json:"unit"`
	Log   bool   `json:"log"`
	// From and To fix the range; equal ones leave it to the data.
	From float64 `json:"from"`
	To   float64 `json:"to"`
}

// Title is the label with its unit.
func (a Axis) Title() string {
	if a.Unit == "" {
		return a.Label
	}
	return a.Label + " [" + a.Unit + "]"
}

// Series is a curve with its standard errors.
type Series struct {
	Label string  `json:"label"`
	Run   int     `json:"run"` // of Figure.Runs, -1 for what belongs to none
	X     Numbers `json:"x"`
	Y     Numbers `json:"y"`
	SE    Numbers `json:"se"`              // empty for what has no error, such as a law
	Key   string  `json:"key"`             // for the legend; "" is the label
	Law   bool    `json:"law"`             // drawn thin and dotted: a comparison, no result
	Steps bool    `json:"steps"`           // a histogram, X being the middle of its bins
	Dots  bool    `json:"dots"`            // measured points, not joined
	Cross bool    `json:"cross,omitempty"` // the points are crosses: not to be used
	Width Numbers `json:"width"`           // of the bins
}

// Map is a quantity on two axes, row by row from the lowest Y.
type Map struct {
	Run    int     `json:"run"`
	XEdges Numbers `json:"xEdges"`
	YEdges Numbers `json:"yEdges"`
	Z      Numbers `json:"z"`
	SE     Numbers `json:"se"`
	Value  Axis    `json:"value"`
	Signed bool    `json:"signed"`          // the middle of the colours is zero
	Close  bool    `json:"close,omitempty"` // the colours end with the values
	Marks  []Mark  `json:"marks,omitempty"` // points of a scan that are not coloured
	// MiddleX and MiddleY are where the points of a scan lie in its cells; empty for others.
	MiddleX Numbers `json:"-"`
	MiddleY Numbers `json:"-"`
}

// Bar is one amount.
type Bar struct {
	Label string  `json:"label"`
	Run   int     `json:"run"`
	Value float64 `json:"-"`
	SE    float64 `json:"-"`
	Pair  Numbers `json:"pair"` // value and error, for JSON
}

// Band marks a stretch of the x axis.
type Band struct {
	From  float64 `json:"from"`
	To    float64 `json:"to"`
	Label string  `json:"label"`
}

// RunMark is what a figure must say of a run that it shows.
type RunMark struct {
	Name    string `json:"name"`
	Verdict string `json:"verdict"`
}

// Figure is what one picture shows: curves, a map or bars.
type Figure struct {
	ID     string    `json:"id"`
	Kind   string    `json:"kind"`
	Title  string    `json:"title"`
	About  string    `json:"about"` // what it is, in a sentence or two
	Alt    string    `json:"alt"`   // what is to be seen, for those who do not see it
	Runs   []RunMark `json:"runs"`
	X      Axis      `json:"x"`
	Y      Axis      `json:"y"`
	Series []Series  `json:"series,omitempty"`
	Map    *Map      `json:"map,omitempty"`
	Bars   []Bar     `json:"bars,omitempty"`
	Bands  []Band    `json:"bands,omitempty"`
	// Crossed says that what failed is marked point by point, so that no stamp is needed.
	Crossed bool `json:"crossed,omitempty"`
}

// Failed are the names of the runs in the figure that are not to be used.
func (f *Figure) Failed() []string { return f.with(store.Fail) }

func (f *Figure) with(verdict string) []string {
	var list []string
	for _, r := range f.Runs {
		if r.Verdict == verdict {
			list = append(list, r.Name)
		}
	}
	return list
}

// Stamp is what stands across the axes, "" where nothing need be said.
func (f *Figure) Stamp() string {
	var parts []string
	if f.Crossed {
		return ""
	}
	if failed := f.Failed(); len(failed) == len(f.Runs) && len(failed) > 0 {
		parts = append(parts, "verdict FAIL: not to be used")
	} else if len(failed) > 0 {
		parts = append(parts, "verdict FAIL: "+strings.Join(failed, ", "))
	}
	if open := f.with(Unfinished); len(open) > 0 {
		parts = append(parts, "unfinished")
	}
	return strings.Join(parts, "; ")
}

// Name is the name of a curve for a legend: with its run where there are several, and its mark.
func (f *Figure) Name(label string, run int) string {
	if run < 0 || run >= len(f.Runs) {
		return label
	}
	r := f.Runs[run]
	if len(f.Runs) > 1 {
		label = r.Name + ": " + label
	}
	if r.Verdict != store.OK {
		label += " (" + strings.ToUpper(r.Verdict) + ")"
	}
	return label
}

// marks lists the runs for the figures made from them.
func marks(runs []*Run) []RunMark {
	var list []RunMark
	for _, r := range runs {
		list = append(list, RunMark{r.Name, r.Verdict()})
	}
	return list
}

// peakText says where a curve is largest.
func peakText(s Series, x, y Axis) string {
	best := -1
	for i, v := range s.Y {
		if !math.IsNaN(v) && (best < 0 || v > s.Y[best]) {
			best = i
		}
	}
	if best < 0 {
		return s.Label + " has no values"
	}
	return fmt.Sprintf("%s is largest, %s %s, at %s %s", s.Label, short(s.Y[best]), y.Unit,
		short(s.X[best]), x.Unit)
}
