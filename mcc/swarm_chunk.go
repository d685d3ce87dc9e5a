package mcc

import (
	"math"
	"slices"

	"ionfall/internal/rng"
)

// swarmBins is the number of bins of the energy distribution, of equal width in speed.
const swarmBins = 256

// swarmChunk is a part of the swarm that one worker moves at a time. Velocities are in m/s,
// positions in m/s times the time step.
type swarmChunk struct {
	vx, vy, vz []float64
	x, y, z    []float64
	out        *Outcome
	sums       swarmSums
}

// swarmSums is what a chunk, or all of them, saw in a block of steps.
type swarmSums struct {
	particleSteps float64
	velocity      float64 // sum of vx over particles and steps [m/s]
	square        float64 // sum of v^2 [m2/s2]
	fastest       float64 // largest v^2 [m2/s2]
	extrapolated  float64 // collisions
	counts        []float64
	speeds        []float64 // particles seen in each bin of speed, and above the last
}

func newSwarmSums(channels int) swarmSums {
	return swarmSums{counts: make([]float64, channels), speeds: make([]float64, swarmBins+1)}
}

func (s *swarmSums) reset() {
	clear(s.counts)
	clear(s.speeds)
	*s = swarmSums{counts: s.counts, speeds: s.speeds}
}

func (s *swarmSums) add(o *swarmSums) {
	s.particleSteps += o.particleSteps
	s.velocity += o.velocity
	s.square += o.square
	s.fastest = max(s.fastest, o.fastest)
	s.extrapolated += o.extrapolated
	for i, n := range o.counts {
		s.counts[i] += n
	}
	for i, n := range o.speeds {
		s.speeds[i] += n
	}
}

// add appends a particle.
func (c *swarmChunk) add(vx, vy, vz, x, y, z float64) {
	c.vx, c.vy, c.vz = append(c.vx, vx), append(c.vy, vy), append(c.vz, vz)
	c.x, c.y, c.z = append(c.x, x), append(c.y, y), append(c.z, z)
}

// remove takes particle i out, the last one taking its place.
func (c *swarmChunk) remove(i int) {
	n := len(c.vx) - 1
	c.vx[i], c.vy[i], c.vz[i] = c.vx[n], c.vy[n], c.vz[n]
	c.x[i], c.y[i], c.z[i] = c.x[n], c.y[n], c.z[n]
	c.cut(n)
}

// double adds a copy of every particle.
func (c *swarmChunk) double() {
	for k := range len(c.vx) {
		c.add(c.vx[k], c.vy[k], c.vz[k], c.x[k], c.y[k], c.z[k])
	}
}

// cut keeps the first n particles.
func (c *swarmChunk) cut(n int) {
	c.vx, c.vy, c.vz = c.vx[:n], c.vy[:n], c.vz[:n]
	c.x, c.y, c.z = c.x[:n], c.y[:n], c.z[:n]
}

// block moves the chunk by a number of steps: flight with velocity change 2 half, then
// collisions. Every "every"-th step the speeds are sorted into bins.
func (c *swarmChunk) block(m *Model, s *rng.Stream, half float64, steps, every int) {
	c.sums.reset()
	for k := range steps {
		c.sums.particleSteps += float64(len(c.vx))
		c.flight(half)
		if k%every == 0 {
			c.sortSpeeds(half, swarmBins/math.Sqrt(m.topSpeed2()))
		}
		m.Collide(s, c.vx, c.vy, c.vz, c.out)
		for i := range c.out.Births {
			b := &c.out.Births[i]
			p := b.Parent
			c.add(b.Electron[0], b.Electron[1], b.Electron[2], c.x[p], c.y[p], c.z[p])
		}
		for _, i := range slices.Backward(c.out.Gone) {
			c.remove(int(i))
		}
		c.out.Births, c.out.Made, c.out.Gone = c.out.Births[:0], c.out.Made[:0], c.out.Gone[:0]
	}
	for i, n := range c.out.Counts {
		c.sums.counts[i] = float64(n)
	}
	c.sums.extrapolated = float64(c.out.Beyond)
	clear(c.out.Counts)
	clear(c.out.Loss)
	c.out.Beyond = 0
}

// flight moves all particles for one step of constant acceleration, which is exact with the
// velocity of the middle of the step, and sums velocities and their squares there.
func (c *swarmChunk) flight(half float64) {
	n := len(c.vx)
	vx, vy, vz := c.vx, c.vy[:n], c.vz[:n]
	x, y, z := c.x[:n], c.y[:n], c.z[:n]
	var velocity, square float64
	fastest := c.sums.fastest
	for i, v := range vx {
		v += half
		u, w := vy[i], vz[i]
		v2 := v*v + u*u + w*w
		velocity += v
		square += v2
		if v2 > fastest {
			fastest = v2
		}
		x[i] += v
		y[i] += u
		z[i] += w
		vx[i] = v + half
	}
	c.sums.velocity += velocity
	c.sums.square += square
	c.sums.fastest = fastest
}

// sortSpeeds counts the speeds of the middle of the step just flown.
func (c *swarmChunk) sortSpeeds(half, perSpeed float64) {
	n := len(c.vx)
	vy, vz := c.vy[:n], c.vz[:n]
	for i, v := range c.vx {
		v -= half
		at := min(perSpeed*math.Sqrt(v*v+vy[i]*vy[i]+vz[i]*vz[i]), swarmBins)
		c.sums.speeds[int(at)]++
	}
}

// topSpeed2 returns the square of the speed up to which the model is tabulated [m2/s2].
func (m *Model) topSpeed2() float64 {
	v := speedAt(m.settings.TopEnergy, m.settings.Mass)
	return v * v
}
