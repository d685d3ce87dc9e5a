package config

import (
	"bufio"
	"bytes"
	"fmt"
	"math"
	"path/filepath"
	"strconv"
	"strings"

	"ionfall/internal/inputerr"
)

// Trace is a measured waveform.
type Trace struct {
	// File as written, relative to the folder of the input.
	File string
	// Frequency of the fundamental [Hz].
	Frequency float64
	// Harmonics that are kept, 0 for the default.
	Harmonics int
}

const (
	defaultBand = 20
	// maxSamples of a trace: oscilloscopes have some millions.
	maxSamples = 1 << 22
	// maxTraceBytes allows 60 characters a sample.
	maxTraceBytes = 60 * maxSamples
	// closure is how far the ends of a period may be apart, as a part of the peak-to-peak voltage.
	closure = 0.02
	// resampled is the number of points that a period is resampled to, between which it is linear.
	resampled = 1 << 14
)

// Waveform is what became of a trace.
type Waveform struct {
	Tones []Tone
	Bias  float64 // [V]
	// Left is the root mean square of what the band limit left out [V], All that of the whole
	// without its mean.
	Left, All float64
	Source    []byte
}

// sample is a line of the file.
type sample struct {
	t, v float64 // [s], [V]
	line int
}

// Load reads the trace; folder is that of the input.
func (t *Trace) Load(folder string) (*Waveform, error) {
	path := t.File
	if !filepath.IsAbs(path) {
		path = filepath.Join(folder, path)
	}
	src, bad := readFile(disk{}, path, maxTraceBytes)
	if bad != nil {
		bad.File = path
		return nil, inputerr.List{bad}
	}
	return t.Read(path, src)
}

// Read is as Load, for the content of the file.
func (t *Trace) Read(path string, src []byte) (*Waveform, error) {
	list, err := readSamples(path, src)
	if err != nil {
		return nil, inputerr.List{err}
	}
	points, err := onePeriod(path, list, 1/t.Frequency)
	if err != nil {
		return nil, inputerr.List{err}
	}
	w := t.analyse(points)
	w.Source = src
	return w, nil
}

// readSamples reads a heading time_UNIT,voltage_UNIT and the lines below; lines that start with #
// are comments.
func readSamples(path string, src []byte) ([]sample, *inputerr.Error) {
	fail := func(line int, got, want string) *inputerr.Error {
		return &inputerr.Error{File: path, Line: line, Got: got, Want: want}
	}
	const heading = "a heading such as time_ns,voltage_V (times in s, ms, us or ns; voltages in V " +
		"or kV)"
	var list []sample
	var perTime, perVoltage float64
	scanner := bufio.NewScanner(bytes.NewReader(bytes.TrimPrefix(src, []byte("\ufeff"))))
	for line := 1; scanner.Scan(); line++ {
		text := strings.TrimSpace(scanner.Text())
		if text == "" || text[0] == '#' {
			continue
		}
		a, b, ok := strings.Cut(text, ",")
		if perTime == 0 {
			perTime, perVoltage = scaleOf(a, "time_", "s"), scaleOf(b, "voltage_", "V")
			if !ok || perTime == 0 || perVoltage == 0 {
				return nil, fail(line, quote(text), heading)
			}
			continue
		}
		t, errT := strconv.ParseFloat(strings.TrimSpace(a), 64)
		v, errV := strconv.ParseFloat(strings.TrimSpace(b), 64)
		if !ok || errT != nil || errV != nil || !(math.Abs(t) < 1e30 && math.Abs(v) < 1e9) {
			return nil, fail(line, quote(text), "a time and a voltage, such as 12.5,-3.4")
		}
		s := sample{t * perTime, v * perVoltage, line}
		if n := len(list); n > 0 && !(s.t > list[n-1].t) {
			return nil, fail(line, "time "+quote(a), "a time after that of the line before")
		}
		if len(list) == maxSamples {
			return nil, fail(line, "more samples", fmt.Sprintf("at most %d", maxSamples))
		}
		list = append(list, s)
	}
	if scanner.Err() != nil {
		return nil, fail(0, "lines that are too long", "a time and a voltage a line")
	}
	if len(list) < 3 {
		return nil, fail(0, fmt.Sprintf("%d samples", len(list)), heading+" and at least 3 samples")
	}
	return list, nil
}

// scaleOf is the SI value of the unit in a heading such as time_ns, 0 if it is another.
func scaleOf(text, name, base string) float64 {
	u, ok := strings.CutPrefix(strings.TrimSpace(text), name)
	if !ok {
		return 0
	}
	prefix, ok := strings.CutSuffix(u, base)
	scale := map[string]float64{"": 1, "m": 1e-3, "u": 1e-6, "n": 1e-9, "k": 1e3}[prefix]
	if !ok || base == "s" && prefix == "k" {
		return 0
	}
	return scale
}

// onePeriod resamples the first period, which must come back to where it started.
func onePeriod(path string, list []sample, period float64) ([]float64, *inputerr.Error) {
	start, end := list[0], list[len(list)-1]
	low, high := start.v, start.v
	for _, s := range list {
		low, high = math.Min(low, s.v), math.Max(high, s.v)
	}
	nanoseconds := func(t float64) string { return strconv.FormatFloat(t*1e9, 'g', 6, 64) + " ns" }
	if end.t-start.t < period*(1-1e-6) {
		return nil, &inputerr.Error{
			File: path, Line: end.line, Got: "an end after " + nanoseconds(end.t-start.t),
			Want: "a whole period of " + nanoseconds(period) + ", its last point included",
		}
	}
	if high == low {
		return nil, &inputerr.Error{File: path, Got: "a constant voltage", Want: "a waveform"}
	}
	at, line := interpolator(list)
	if back := at(start.t + period); math.Abs(back-start.v) > closure*(high-low) {
		return nil, &inputerr.Error{
			File: path, Line: line(start.t + period),
			Got: fmt.Sprintf("%.6g V after a period of %s that starts with %.6g V", back,
				nanoseconds(period), start.v),
			Want: fmt.Sprintf("the same to %g %% of the peak-to-peak voltage", 100*closure),
			Hint: "the trace does not close its period: is the frequency right?",
		}
	}
	points := make([]float64, resampled)
	for i := range points {
		points[i] = at(start.t + period*float64(i)/resampled)
	}
	return points, nil
}

// interpolator returns the linear interpolation for increasing times, and the line it is read from.
func interpolator(list []sample) (at func(t float64) float64, line func(t float64) int) {
	find := func(t float64) int {
		low, high := 0, len(list)-1
		for high-low > 1 {
			if mid := (low + high) / 2; list[mid].t <= t {
				low = mid
			} else {
				high = mid
			}
		}
		return high
	}
	at = func(t float64) float64 {
		k := find(t)
		a, b := list[k-1], list[k]
		return a.v + (b.v-a.v)*min(1, (t-a.t)/(b.t-a.t))
	}
	return at, func(t float64) int { return list[find(t)].line }
}

// analyse finds the Fourier components of a period, up to the band limit.
func (t *Trace) analyse(points []float64) *Waveform {
	w := &Waveform{}
	n := float64(len(points))
	for _, v := range points {
		w.Bias += v / n
	}
	square, kept := 0.0, 0.0
	for _, v := range points {
		square += (v - w.Bias) * (v - w.Bias) / n
	}
	band := t.Harmonics
	if band == 0 {
		band = defaultBand
	}
	for k := 1; k <= band; k++ {
		var re, im float64
		for i, v := range points {
			sin, cos := math.Sincos(2 * math.Pi * float64(k*i%len(points)) / n)
			re += 2 / n * (v - w.Bias) * cos
			im -= 2 / n * (v - w.Bias) * sin
		}
		a := math.Hypot(re, im)
		kept += a * a / 2
		w.Tones = append(w.Tones, Tone{
			Frequency: multiple(t.Frequency, k), Amplitude: a, Phase: math.Atan2(im, re),
		})
	}
	w.All, w.Left = math.Sqrt(square), math.Sqrt(math.Max(0, square-kept))
	return w
}
