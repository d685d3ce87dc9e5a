package progress

import (
	"fmt"
	"io"
	"math"
	"strings"
	"time"
)

// NewLines returns a printer of one line a report.
func NewLines(out io.Writer, pace Pace) Printer {
	return &paced{out: out, form: lines{}, pace: pace}
}

type lines struct{}

func (lines) report(s Status) string { return sentence(s) + "\n" }
func (lines) clear() string          { return "" }
func (lines) restore() string        { return "" }
func (lines) end() string            { return "" }

// sentence is a status as text, the most telling first: a narrow terminal shows its start.
func sentence(s Status) string {
	parts := []string{
		fmt.Sprintf("%s: period %d", s.Stage, s.Periods),
		Count(s.Particles) + " particles",
	}
	if !math.IsNaN(s.EnergyEV) {
		energy := WithError(s.EnergyEV, s.EnergyErrEV)
		if math.IsNaN(s.EnergyErrEV) {
			energy = Digits(s.EnergyEV, settlingDigits)
		}
		parts = append(parts, "ion energy "+energy+" eV")
	}
	switch {
	case s.Stage == "done":
		parts = append(parts, Duration(s.Elapsed)+" in all")
	case s.Remaining >= 0:
		parts = append(parts, "about "+Duration(s.Remaining)+" left")
	default:
		parts = append(parts, Duration(s.Elapsed)+" so far")
	}
	if s.Event != "" {
		parts = append(parts, s.Event)
	}
	return strings.Join(parts, ", ")
}

// settlingDigits is how many digits of a single period's energy are worth reading.
const settlingDigits = 3

// Count is a large number in short: 940, 12.3k, 1.20M.
func Count(n int64) string {
	v, unit := float64(n), ""
	for _, u := range []string{"k", "M", "G"} {
		if math.Abs(v) < 999.5 {
			break
		}
		v, unit = v/1000, u
	}
	if unit == "" {
		return fmt.Sprint(n)
	}
	return Digits(v, 3) + unit
}

// Duration is a time in its two largest units: 40 s, 3 min 20 s, 5 h 12 min, 2 d 3 h.
func Duration(d time.Duration) string {
	seconds := int64(d.Round(time.Second) / time.Second)
	if seconds < 10 && d > 0 {
		return fmt.Sprintf("%.1f s", d.Seconds())
	}
	if seconds < 60 {
		return fmt.Sprintf("%d s", max(0, seconds))
	}
	large, small, l, s := seconds/60, seconds%60, "min", "s"
	switch minutes := (seconds + 30) / 60; {
	case minutes >= 48*60:
		large, small, l, s = (minutes+30)/60/24, (minutes+30)/60%24, "d", "h"
	case seconds >= 3600:
		large, small, l, s = minutes/60, minutes%60, "h", "min"
	}
	if small == 0 {
		return fmt.Sprintf("%d %s", large, l)
	}
	return fmt.Sprintf("%d %s %d %s", large, l, small, s)
}
