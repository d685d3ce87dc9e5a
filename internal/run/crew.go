package run

import (
	"time"

	"ionfall/pic"
)

// crew finds the number of workers that is fastest here and now. Workers meet at every step, so
// on a machine that others use, too, or with few particles, fewer can be faster. Results do not
// depend on the number, so the clock may choose it.
type crew struct {
	most    int // workers allowed
	now     int
	before  int           // the number that a trial is compared with; 0 when none is on
	perStep time.Duration // of the number before
	since   time.Duration // since the last trial
	rest    time.Duration // from one trial to the next
}

const (
	firstTrial = 300 * time.Millisecond
	rarest     = 30 * time.Second
	// gain is the advantage that makes a change worth it.
	gain = 0.95
)

func newCrew(s *pic.Simulation, most int) crew {
	s.SetWorkers(most)
	return crew{most: max(1, most), now: max(1, most), rest: firstTrial}
}

// watch takes the time a step took over a segment and may change the number of workers.
func (c *crew) watch(s *pic.Simulation, perStep, took time.Duration) {
	if c.most == 1 {
		return
	}
	if c.before > 0 {
		if float64(perStep) > gain*float64(c.perStep) { // not worth it: back
			c.set(s, c.before)
			c.rest = min(2*c.rest, rarest)
		} else {
			c.rest = firstTrial
		}
		c.before, c.since = 0, 0
		return
	}
	c.since += took
	if c.since < c.rest {
		return
	}
	c.before, c.perStep = c.now, perStep
	if c.now == c.most {
		c.set(s, max(1, c.now/2))
	} else {
		c.set(s, min(c.most, 2*c.now))
	}
}

func (c *crew) set(s *pic.Simulation, n int) {
	c.now = n
	s.SetWorkers(n)
}
