package diagnostics

import (
	"math"

	"ionfall/crosssections"
	"ionfall/internal/kernels"
	"ionfall/internal/phys"
	"ionfall/pic"
)

// Recorder is a pic.Observer that collects everything a results folder holds.
type Recorder struct {
	config  pic.Config
	species []*speciesRecord
	stride  int64
	on      bool
	// see SetWander
	wander, negative float64
	phases           int // bins of RF phase

	thresholds []float64 // [eV]
	volume     []float64 // of the nodes, per area of the powered electrode [m]
	regions    []Region
	eBins      *bins

	// sums over the running batch
	grid     [][]float64 // by quantity: PhaseBins x nodes
	samples  []int64     // grid samples by phase
	circuit  [circuitRows][]float64
	steps    []int64 // circuit samples by phase
	batch    int     // periods of a batch
	periods  int     // in the running batch
	averages averages
}

// Region is a part of the gap in which electron energies are recorded.
type Region struct {
	Name     string
	From, To float64 // [m]

	firstZone, lastZone int
}

// speciesRecord is what is collected for one species.
type speciesRecord struct {
	name     string
	charge   int
	mass     float64
	kickPerE float64 // velocity unit per V/m
	eVPerV2  float64
	unit     float64
	every    int
	chunks   []chunkRecord
	impacts  [2]*impactRecord // by wall; nil for electrons
	ionizes  []bool           // by collision channel
}

// chunkRecord is written only by the worker that owns the chunk.
type chunkRecord struct {
	moments   []kernels.Moments // cell sums of the sampled step
	field     []kernels.Field   // kicks
	energy    []float64         // of a block of particles
	ionized   []int64           // phases x nodes
	electrons kernels.Spectrum  // by zone and energy bin
	hits      [2]hitRecord
	moves     []int64 // electrons seen, and those that cross more than a cell in a step
	count     int64   // particles at the sampled step
}

// Quantities on the grid; by species after these.
const (
	gridPotential = iota
	gridField
	gridIonization
	gridFixed
)

// By-species quantities.
const (
	gridDensity = iota
	gridPower
	gridEnergy
	gridPerSpecies
)

// sampleParts is into how many parts the chunks are divided, of which a sampled step looks at one:
// the sums of successive samples are much alike, and looking at all of them cost 18 % of a run.
const sampleParts = 4

// block is the number of particles that are looked at in one call of a kernel.
const block = 2048

const (
	circuitVoltage = iota
	circuitCurrent
	circuitMidGap
	circuitRows
)

// New returns a recorder for the simulation, switched off: see Start. Impacts above each of the
// thresholds [eV] are counted. periods is how long the average will be, 0 if it may be long: a
// short one is sampled more often, so that it has enough batches.
func New(s *pic.Simulation, thresholds []float64, periods int) *Recorder {
	c := s.Config()
	r := &Recorder{config: c, thresholds: thresholds, stride: strideFor(c.StepsPerPeriod)}
	r.phases = min(PhaseBins, c.StepsPerPeriod)
	for periods > 0 && r.stride > 1 && r.periodsToSee() > max(1, periods/fewBatches) {
		r.stride--
		for gcd(int(r.stride), c.StepsPerPeriod) != 1 {
			r.stride--
		}
	}
	r.regions = regionsOf(c.Gap)
	r.eBins = electronBins(electronTop(c.LargestVoltage()))
	nodes := c.Cells + 1
	for j := range nodes {
		r.volume = append(r.volume, c.NodeVolume(j))
	}
	list := s.Species()
	for i := range list {
		r.species = append(r.species, newSpeciesRecord(r, &c, &list[i]))
	}
	r.grid = make([][]float64, gridFixed+gridPerSpecies*len(list))
	for q := range r.grid {
		r.grid[q] = make([]float64, r.phases*nodes)
	}
	r.samples, r.steps = make([]int64, r.phases), make([]int64, r.phases)
	for q := range r.circuit {
		r.circuit[q] = make([]float64, r.phases)
	}
	r.averages = newAverages(r)
	return r
}

func newSpeciesRecord(r *Recorder, c *pic.Config, sp *pic.Species) *speciesRecord {
	electrons := len(r.species) == 0 && sp.Charge < 0
	unit := c.VelocityUnit(sp.Every)
	rec := &speciesRecord{
		name: sp.Name, charge: sp.Charge, mass: sp.Mass, every: sp.Every, unit: unit,
		eVPerV2: 0.5 * sp.Mass * unit * unit / phys.ElementaryCharge,
		kickPerE: float64(sp.Charge) * phys.ElementaryCharge / sp.Mass *
			c.TimeStep() * float64(sp.Every) / unit,
		chunks: make([]chunkRecord, c.Chunks),
	}
	if sp.Collisions != nil {
		for _, p := range sp.Collisions.Processes() {
			rec.ionizes = append(rec.ionizes, p.Kind == crosssections.Ionization)
		}
	}
	for k := range rec.chunks {
		ch := &rec.chunks[k]
		ch.moments, ch.field = make([]kernels.Moments, c.Cells), make([]kernels.Field, c.Cells)
		ch.energy = make([]float64, block)
		if electrons {
			ch.ionized = make([]int64, r.phases*(c.Cells+1))
			ch.electrons = r.newSpectrum(rec.eVPerV2)
			ch.moves = make([]int64, 2)
		}
	}
	if sp.Charge >= 0 {
		ions := uniformBins(1.3*c.LargestVoltage()+30, ionEnergyBins)
		for wall := range rec.impacts {
			rec.impacts[wall] = newImpactRecord(ions, len(r.thresholds))
			for k := range rec.chunks {
				rec.chunks[k].hits[wall] = newHitRecord(rec.impacts[wall])
			}
		}
	}
	return rec
}

// electronTop is the end of the electron energy table: tails beyond twice an ionization energy
// carry nothing that is worth a bin, except fast secondaries from the walls.
func electronTop(largest float64) float64 { return math.Max(60, math.Min(1.2*largest, 400)) }

// zoneEdges part the gap into the zones of kernels.Spectrum.
func zoneEdges() [4]float64 {
	return [4]float64{0.25, 0.5 - 0.5*centerPart, 0.5 + 0.5*centerPart, 0.75}
}

// regionsOf divides the gap for electron energies, each region a run of zones.
func regionsOf(gap float64) []Region {
	e := zoneEdges()
	return []Region{
		{"powered_quarter", 0, e[0] * gap, 0, 0},
		{"center", e[1] * gap, e[2] * gap, 2, 2},
		{"grounded_quarter", e[3] * gap, gap, 4, 4},
		{"gap", 0, gap, 0, 4},
	}
}

// newSpectrum returns empty counts of electrons whose energy is eVPerV2 times v^2.
func (r *Recorder) newSpectrum(eVPerV2 float64) kernels.Spectrum {
	s := kernels.Spectrum{
		PerEnergy: eVPerV2 * r.eBins.perBin, Bin: r.eBins.index, Bins: r.eBins.count(),
	}
	for k, part := range zoneEdges() {
		s.Edges[k] = part * float64(r.config.Cells)
	}
	s.Counts = make([]int64, (len(s.Edges)+1)*s.Bins)
	return s
}

// strideFor returns a sampling stride near a fortieth of the period's steps, at least 4 and at
// most 24, without common factor with them.
func strideFor(steps int) int64 {
	m := max(4, min(24, steps/40))
	for gcd(m, steps) != 1 {
		m++
	}
	return int64(m)
}

func gcd(a, b int) int {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// Start switches recording on, with batches of the given number of periods (lengthened, if
// need be, so that every phase is sampled in each). To be called between two periods.
func (r *Recorder) Start(batch int) {
	r.on = true
	r.batch = max(batch, r.periodsToSee())
}

// periodsToSee returns how many periods it takes, from any step, to sample every phase bin.
func (r *Recorder) periodsToSee() int {
	steps := int64(r.config.StepsPerPeriod)
	most := 1
	for start := range r.stride {
		seen := make(map[int]bool)
		for n := start; len(seen) < r.phases; n += r.stride {
			seen[r.phase(n)] = true
			most = max(most, int(n/steps)+1)
		}
	}
	return most
}

// On tells whether the recorder is recording.
func (r *Recorder) On() bool { return r.on }

// phase returns the phase bin of step n.
func (r *Recorder) phase(n int64) int {
	steps := int64(r.config.StepsPerPeriod)
	return int((n % steps) * int64(r.phases) / steps)
}

// Due implements pic.Observer.
func (r *Recorder) Due(n int64) bool { return r.on && n%r.stride == 0 }

// Step implements pic.Observer.
func (r *Recorder) Step(c pic.Circuit) {
	if !r.on {
		return
	}
	p := r.phase(c.Step)
	r.steps[p]++
	r.circuit[circuitVoltage][p] += c.Voltage
	r.circuit[circuitCurrent][p] += c.Current
	r.circuit[circuitMidGap][p] += c.MidGap
}

// Events implements pic.Observer: it counts ionizations on the nearest node.
func (r *Recorder) Events(n int64, species, chunk int, x []float64, events []pic.Event) {
	rec := r.species[species]
	if !r.on || species != 0 || rec.charge >= 0 {
		return
	}
	row := rec.chunks[chunk].ionized[r.phase(n)*(r.config.Cells+1):]
	for _, e := range events {
		if rec.ionizes[e.Channel] {
			row[int(x[e.Particle]+0.5)]++
		}
	}
}

// Particles implements pic.Observer: cell sums of the power from the field and of the energy, and
// electron energies by zone. Velocities are taken half a kick on, at the time of the positions.
func (r *Recorder) Particles(f *pic.Frame, species, chunk int, p pic.Particles) {
	rec := r.species[species]
	ch := &rec.chunks[chunk]
	ch.count = int64(len(p.X))
	if !r.looksAt(f.Step, chunk) {
		return
	}
	clear(ch.moments)
	for j := range ch.field {
		ch.field[j] = kernels.Field{A: rec.kickPerE * f.FieldA[j], D: rec.kickPerE * f.FieldD[j]}
	}
	fast := 0
	for from := 0; from < len(p.X); from += block {
		to := min(len(p.X), from+block)
		fast += r.config.Kernels.AddMoments(p.X[from:to], p.VX[from:to], p.VY[from:to],
			p.VZ[from:to], ch.field, ch.moments, ch.energy)
		if ch.moves != nil {
			ch.electrons.Add(p.X[from:to], ch.energy)
		}
	}
	if ch.moves != nil {
		ch.moves[0] += int64(len(p.X))
		ch.moves[1] += int64(fast)
	}
}

// parts returns into how many parts the chunks are divided.
func (r *Recorder) parts() int { return min(sampleParts, r.config.Chunks) }

// part returns the part of the chunks that sampled step n looks at: chunks first, first + parts
// and so on. The parts take turns from sample to sample; the same step of the period comes again
// after steps x stride steps, with turn larger by an odd number, so with another part.
func (r *Recorder) part(n int64) (first int) {
	steps := int64(r.config.StepsPerPeriod)
	turn := n / r.stride
	if steps%2 == 0 {
		turn += n / (steps * r.stride)
	}
	return int(turn % int64(r.parts()))
}

// looksAt tells whether a sampled step looks at the particles of a chunk.
func (r *Recorder) looksAt(n int64, chunk int) bool { return chunk%r.parts() == r.part(n) }

// share returns by how much the sums over the chunks of sampled step n are to be multiplied to
// stand for all particles of the species.
func (r *Recorder) share(rec *speciesRecord, n int64) float64 {
	var all, seen int64
	for c := range rec.chunks {
		all += rec.chunks[c].count
		if r.looksAt(n, c) {
			seen += rec.chunks[c].count
		}
	}
	if seen == 0 {
		return 0
	}
	return float64(all) / float64(seen)
}

// Reduce implements pic.Observer: each worker adds up a range of nodes, over chunks in order.
func (r *Recorder) Reduce(f *pic.Frame, worker, workers int) {
	nodes := r.config.Cells + 1
	from, to := worker*nodes/workers, (worker+1)*nodes/workers
	p := r.phase(f.Step)
	if worker == 0 {
		r.samples[p]++
	}
	base := p * nodes
	for j := from; j < to; j++ {
		r.grid[gridPotential][base+j] += f.Phi[j]
		r.grid[gridField][base+j] += f.E[j]
	}
	for i, rec := range r.species {
		first := gridFixed + gridPerSpecies*i
		density := r.grid[first+gridDensity]
		power := r.grid[first+gridPower]
		energy := r.grid[first+gridEnergy]
		// a v of one particle [units^2] is 2 eVPerV2 a v [eV] a move.
		watt := 2 * rec.eVPerV2 * phys.ElementaryCharge / (r.config.TimeStep() * float64(rec.every))
		share := r.share(rec, f.Step)
		for j := from; j < to; j++ {
			perVolume := f.Weight / r.volume[j]
			var sumPower, sumEnergy float64
			for c := r.part(f.Step); c < len(rec.chunks); c += r.parts() {
				if m := rec.chunks[c].moments; j < len(m) {
					sumPower += m[j].Power - m[j].PowerRight
					sumEnergy += m[j].Energy - m[j].EnergyRight
				}
				if j > 0 {
					sumPower += rec.chunks[c].moments[j-1].PowerRight
					sumEnergy += rec.chunks[c].moments[j-1].EnergyRight
				}
			}
			density[base+j] += perVolume * f.Number[i][j]
			power[base+j] += perVolume * share * watt * sumPower
			energy[base+j] += perVolume * share * rec.eVPerV2 * sumEnergy
		}
	}
}
