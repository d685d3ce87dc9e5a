package pic

import "ionfall/mcc"

// Species is one kind of charged particle, or of fast neutrals.
type Species struct {
	Name   string
	Charge int     // in units of e
	Mass   float64 // [kg]
	// Every is K: the species moves once every K steps.
	Every int
	// Collisions with the gas, in units of Config.VelocityUnit; nil for none.
	Collisions *mcc.Model
	// Least is the energy below which neutrals are not followed [eV].
	Least float64

	chunks    []chunk
	ionOf     []int   // electrons: species born by each collision channel, -1 for none
	madeOf    [][]int // species of each product of each channel, -1 for none
	hitOf     []int   // species of the target of each channel, -1 for none
	least2    float64 // square of the speed of Least
	kickPerE  float64 // velocity gained a move from 1 V/m
	energyPer float64 // J per unit of v^2: m/2 (dx/dt)^2
}

// FastPrefix before the name of a neutral makes that of the species of its fast ones.
const FastPrefix = "fast_"

// chunk is a fixed part of a species' particles: positions [cells], velocities [cells/step].
type chunk struct {
	x, vx, vy, vz []float64
	out           []int32
	hits          []Hit
	outcome       *mcc.Outcome
	tally         tally
}

// Hit is a particle absorbed by an electrode, with its velocity [cells/step] where it crossed.
type Hit struct {
	Wall       Wall
	VX, VY, VZ float64
}

// Wall names an electrode.
type Wall int

const (
	// Powered is the electrode at x = 0.
	Powered Wall = 0
	// Grounded is the electrode at x = Gap.
	Grounded Wall = 1
)

func (w Wall) String() string { return [...]string{"powered", "grounded"}[w] }

// due tells whether the species moves at step n.
func (sp *Species) due(n int64) bool {
	k := int64(sp.Every)
	return k == 1 || n%k == k/2
}

// add appends a particle.
func (c *chunk) add(x, vx, vy, vz float64) {
	c.x = append(c.x, x)
	c.vx = append(c.vx, vx)
	c.vy = append(c.vy, vy)
	c.vz = append(c.vz, vz)
}

// remove takes particle i out, the last one taking its place.
func (c *chunk) remove(i int) {
	n := len(c.x) - 1
	c.x[i], c.vx[i], c.vy[i], c.vz[i] = c.x[n], c.vx[n], c.vy[n], c.vz[n]
	c.truncate(n)
}

func (c *chunk) truncate(n int) {
	c.x, c.vx, c.vy, c.vz = c.x[:n], c.vx[:n], c.vy[:n], c.vz[:n]
}

// reserve makes room, so that births within a step need no allocation.
func (c *chunk) reserve() {
	n := len(c.x)
	want := n + n/16 + 256
	if cap(c.x) < want || cap(c.vx) < want || cap(c.vy) < want || cap(c.vz) < want {
		room := n + n/8 + 1024
		c.x, c.vx = grow(c.x, room), grow(c.vx, room)
		c.vy, c.vz = grow(c.vy, room), grow(c.vz, room)
	}
	if cap(c.out) < cap(c.x) {
		c.out = make([]int32, cap(c.x))
	}
	c.out = c.out[:cap(c.out)]
}

func grow(a []float64, room int) []float64 {
	b := make([]float64, len(a), room)
	copy(b, a)
	return b
}

// Count returns the number of particles of the species.
func (sp *Species) Count() int {
	n := 0
	for i := range sp.chunks {
		n += len(sp.chunks[i].x)
	}
	return n
}
