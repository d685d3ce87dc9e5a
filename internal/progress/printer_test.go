package progress

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"strings"
	"sync"
	"testing"
	"testing/synctest"
	"time"
)

// settling is a status before there is an average.
func settling(period int) Status {
	return Status{
		Stage: "settling", Periods: period, Particles: 12345, EnergyEV: 23.4187,
		EnergyErrEV: math.NaN(), Flux: 1e18, FluxErr: math.NaN(),
		Elapsed: 5 * time.Second, Remaining: -1,
	}
}

func averaging(period int) Status {
	return Status{
		Stage: "averaging", Periods: period, Particles: 12345, EnergyEV: 23.4187,
		EnergyErrEV: 0.1234, Flux: 1e18, FluxErr: 1e16,
		Elapsed: 65 * time.Second, Remaining: 200 * time.Second,
	}
}

// Goal: the sentence in every stage. Method: whole texts.
func TestSentence(t *testing.T) {
	early := settling(1)
	early.EnergyEV = math.NaN()
	event := averaging(42)
	event.Event = "particles doubled, weight halved"
	done := averaging(50)
	done.Stage, done.Remaining = "done", 0
	for _, c := range []struct {
		s    Status
		want string
	}{
		{early, "settling: period 1, 12.3k particles, 5.0 s so far"},
		{settling(2), "settling: period 2, 12.3k particles, ion energy 23.4 eV, 5.0 s so far"},
		{event, "averaging: period 42, 12.3k particles, ion energy 23.42 +- 0.12 eV, " +
			"about 3 min 20 s left, particles doubled, weight halved"},
		{done, "done: period 50, 12.3k particles, ion energy 23.42 +- 0.12 eV, 1 min 5 s in all"},
	} {
		if got := sentence(c.s); got != c.want {
			t.Errorf("got %q, want %q", got, c.want)
		}
	}
}

// Goal: a line at once, at a change of the stage, each minute, and the last. Method: a status a
// second in fake time; the periods of the lines say when.
func TestLinesPace(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		var out bytes.Buffer
		p := NewLines(&out, Minutely())
		for period := 1; period <= 200; period++ {
			s := settling(period)
			if period > 90 {
				s = averaging(period)
			}
			p.Show(s)
			time.Sleep(time.Second)
		}
		p.Close()
		p.Show(averaging(300))
		p.Now()
		compare(t, periods(out.String()), "1 61 91 151 200")
	})
}

// periods are those of the lines of an output.
func periods(out string) string {
	var list []string
	for line := range strings.Lines(out) {
		_, rest, _ := strings.Cut(line, "period ")
		n, _, _ := strings.Cut(rest, ",")
		list = append(list, n)
	}
	return strings.Join(list, " ")
}

func compare(t *testing.T, got, want string) {
	t.Helper()
	if got != want {
		t.Errorf("got\n%q\nwant\n%q", got, want)
	}
}

// Goal: Now prints the newest status at once, also twice, and nothing before there is one; on
// demand nothing else is printed. Method: both paces.
func TestNow(t *testing.T) {
	var out bytes.Buffer
	p := NewLines(&out, OnDemand())
	p.Now()
	p.Show(settling(1))
	p.Show(settling(2))
	p.Now()
	p.Now()
	p.Show(averaging(3))
	p.Close()
	compare(t, periods(out.String()), "2 2")
}

// Goal: the last status is printed once. Method: closing after one that was printed and after one
// that was not.
func TestLastReport(t *testing.T) {
	for n, want := range map[int]string{0: "", 1: "1", 2: "1 2"} {
		var out bytes.Buffer
		p := NewLines(&out, Minutely())
		for period := 1; period <= n; period++ {
			p.Show(settling(period))
		}
		p.Close()
		p.Close()
		compare(t, periods(out.String()), want)
	}
}

// Goal: an event between two reports is told in the next, once. Method: lines a minute.
func TestEventIsNotLost(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		var out bytes.Buffer
		p := NewLines(&out, Minutely())
		for period := 1; period <= 181; period++ {
			s := settling(period)
			if period == 30 {
				s.Event = "something"
			}
			p.Show(s)
			time.Sleep(time.Second)
		}
		p.Close()
		for line := range strings.Lines(out.String()) {
			told, at61 := strings.Contains(line, "something"), strings.Contains(line, "period 61,")
			if told != at61 {
				t.Errorf("got %q, want the event at period 61 alone", line)
			}
		}
	})
}

// Goal: the terminal shows at most five reports a second, in one line, and ends with a line end.
// Method: a status each 10 ms for 1.5 s in fake time.
func TestTerminalPace(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		var out bytes.Buffer
		p := NewTerminal(&out, func() int { return 200 })
		for period := range 150 {
			p.Show(settling(period))
			time.Sleep(10 * time.Millisecond)
		}
		p.Close()
		reports := strings.Split(out.String(), "\r")[1:]
		if n := len(reports); n != 9 { // at 0, 0.2 ... 1.4 s, and the last
			t.Errorf("got %d reports, want 9", n)
		}
		if text := out.String(); strings.Count(text, "\n") != 1 || !strings.HasSuffix(text, "\n") {
			t.Errorf("got %q, want one line end, at the end", text)
		}
		if last := screen(t, out.String(), 200)[0]; !strings.HasPrefix(last, "settling: period 149,") {
			t.Errorf("got %q, want the last period", last)
		}
	})
}

// screen plays what is written to a terminal: carriage return, line end, characters.
// It fails if a line is wider than the terminal.
func screen(t *testing.T, out string, width int) []string {
	t.Helper()
	lines, column := [][]rune{{}}, 0
	for _, r := range out {
		line := &lines[len(lines)-1]
		switch r {
		case '\r':
			column = 0
		case '\n':
			lines, column = append(lines, []rune{}), 0
		default:
			if column == len(*line) {
				*line = append(*line, r)
			}
			(*line)[column] = r
			column++
		}
		if column >= width {
			t.Fatalf("column %d of a terminal of %d is written to", column, width)
		}
	}
	var texts []string
	for _, line := range lines {
		texts = append(texts, strings.TrimRight(string(line), " "))
	}
	return texts
}

// Goal: a shorter report leaves nothing of a longer one; a narrow terminal cuts; a terminal that
// is made narrower is not overrun. Method: what the screen shows.
func TestTerminalLine(t *testing.T) {
	width := 200
	var out bytes.Buffer
	p := NewTerminal(&out, func() int { return width })
	long := averaging(1)
	p.Show(long)
	p.Show(settling(2))
	compare(t, screen(t, out.String(), width)[0], sentence(settling(2)))

	out.Reset()
	width = 30
	p.Now()
	compare(t, screen(t, out.String(), width)[0], sentence(settling(2))[:29])

	out.Reset()
	width = 0 // not known
	p.Show(long)
	compare(t, screen(t, out.String(), 80)[0], strings.TrimRight(sentence(long)[:79], " "))
	width = 1
	p.Now()
}

// Goal: log lines stand whole, above the line that is redrawn. Method: what the screen shows.
func TestTerminalLog(t *testing.T) {
	var out bytes.Buffer
	p := NewTerminal(&out, func() int { return 200 })
	if _, err := p.Write([]byte("before\n")); err != nil {
		t.Error(err)
	}
	p.Show(settling(1))
	if n, err := p.Write([]byte("a warning\n")); n != 10 || err != nil {
		t.Errorf("got %d, %v, want 10 bytes written", n, err)
	}
	p.Now()
	p.Close()
	if _, err := p.Write([]byte("after\n")); err != nil {
		t.Error(err)
	}
	want := "before\na warning\n" + sentence(settling(1)) + "\nafter\n"
	compare(t, strings.Join(screen(t, out.String(), 200), "\n"), want)
}

// Goal: JSON has every number, and null for what is not known. Method: whole lines.
func TestJSON(t *testing.T) {
	var out bytes.Buffer
	p := NewJSON(&out, Minutely())
	p.Show(settling(1))
	s := averaging(2)
	s.Event = "x"
	p.Show(s)
	p.Close()
	compare(t, out.String(), `{"stage":"settling","periods":1,"particles":12345,`+
		`"ion_mean_energy_eV":23.4187,"ion_mean_energy_eV_se":null,"ion_flux_m2ps":1000000000000000000,`+
		`"ion_flux_m2ps_se":null,"elapsed_s":5,"remaining_s":null}`+"\n"+
		`{"stage":"averaging","periods":2,"particles":12345,"ion_mean_energy_eV":23.4187,`+
		`"ion_mean_energy_eV_se":0.1234,"ion_flux_m2ps":1000000000000000000,`+
		`"ion_flux_m2ps_se":10000000000000000,"elapsed_s":65,"remaining_s":200,"event":"x"}`+"\n")
}

// broken is an output whose reader is gone; it counts the attempts.
type broken struct{ attempts int }

func (b *broken) Write([]byte) (int, error) {
	b.attempts++
	return 0, errors.New("gone")
}

// Goal: a broken output is left alone. Method: an output that fails, counting.
func TestBrokenOutput(t *testing.T) {
	out := &broken{}
	p := NewTerminal(out, func() int { return 80 })
	for period := range 10 {
		p.Show(settling(period))
		p.Now()
	}
	p.Close()
	if out.attempts != 1 {
		t.Errorf("got %d writes, want 1", out.attempts)
	}
}

// Goal: reports and log lines from many goroutines do not mix. Method: every line is one of them,
// whole; the race detector sees the rest.
func TestManyGoroutines(t *testing.T) {
	var out bytes.Buffer
	p := NewLines(&out, Pace{Every: time.Nanosecond, Last: true})
	var group sync.WaitGroup
	for g := range 4 {
		group.Go(func() {
			for i := range 50 {
				p.Show(settling(i))
				p.Now()
				if _, err := fmt.Fprintf(p, "log %d\n", g); err != nil {
					t.Error(err)
				}
			}
		})
	}
	group.Wait()
	p.Close()
	logs := 0
	for line := range strings.Lines(out.String()) {
		switch {
		case strings.HasPrefix(line, "log "):
			logs++
		case !strings.HasPrefix(line, "settling: ") || !strings.HasSuffix(line, " so far\n"):
			t.Errorf("got %q, want a whole line", line)
		}
	}
	if logs != 200 {
		t.Errorf("got %d log lines, want 200", logs)
	}
}
