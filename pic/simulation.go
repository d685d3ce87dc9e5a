package pic

import (
	"fmt"
	"math"
	"runtime"

	"golang.org/x/sync/errgroup"

	"ionfall/internal/kernels"
	"ionfall/internal/phys"
)

// Simulation is a discharge at step Step. Advance moves it; between calls it may be looked at,
// saved, or resized.
type Simulation struct {
	config    Config
	species   []Species
	observers []Observer
	poisson   *poisson
	loop      loop
	area      []float64 // at the nodes, over the powered electrode's; nil for plates
	voltage   []float64 // one period of the drive
	workers   []*worker

	step        int64
	stop        int64 // step at which the running Advance ends
	electric    float64
	moved       int64
	ledgerStart int64
	lastE0      float64 // at the last step, for the current
	lastVoltage float64
	haveField   bool
	sync        *barrier
}

// worker owns chunks index, index+workers, ... and a copy of the grid.
type worker struct {
	index int
	step  int64
	moved int64
	// deposit[side][species]: cell words of the worker's own particles. Side n&1 belongs to
	// step n: while it is read, the other is written.
	deposit  [2][][]uint64
	absorbed [2]int64     // net charge number that the powered electrode took in a step
	circuit  circuitState // of the circuit at step, as all workers'

	number         [][]float64 // by species, all workers' particles at each node
	net, rhs       []float64
	phi, e         []float64
	fieldA, fieldD []float64
	kick           [][]kernels.Field // by species
	fieldSum       [][]kernels.Field // by species, sub-cycled ones
	summed         []int64
	frame          Frame
	events         []Event
	half           halfKick
	pairs          pairing
	meeting        [2]pairing // of the two species of a PairReaction
	ended          [2][]int32
}

// New returns an empty discharge at step 0. Fill it by Load or Add, then Advance.
func New(c Config) (*Simulation, error) {
	if err := c.check(); err != nil {
		return nil, err
	}
	if c.Kernels.PushDeposit == nil {
		c.Kernels = kernels.Best()
	}
	c.TopVoltage = c.LargestVoltage()
	s := &Simulation{
		config: c, species: append([]Species(nil), c.Species...),
		poisson: newPoisson(&c), loop: newLoop(&c), voltage: c.Drive.samples(c.StepsPerPeriod),
	}
	if c.Geometry.Shape != Plates {
		for j := range c.Cells + 1 {
			s.area = append(s.area, c.Area(float64(j)))
		}
	}
	for i := range s.species {
		sp := &s.species[i]
		unit := c.VelocityUnit(sp.Every)
		move := c.TimeStep() * float64(sp.Every)
		sp.kickPerE = float64(sp.Charge) * phys.ElementaryCharge / sp.Mass * move / unit
		sp.energyPer = 0.5 * sp.Mass * unit * unit
		sp.least2 = sp.Least * phys.ElementaryCharge / sp.energyPer
		sp.chunks = make([]chunk, c.Chunks)
		if err := s.linkBirths(sp); err != nil {
			return nil, err
		}
		for k := range sp.chunks {
			if sp.Collisions != nil {
				sp.chunks[k].outcome = sp.Collisions.NewOutcome()
			}
			sp.chunks[k].reserve()
		}
	}
	s.SetWorkers(1)
	return s, nil
}

// Observe adds an observer, after those there are. Only between steps.
func (s *Simulation) Observe(o Observer) { s.SetObservers(append(s.observers, o)...) }

// SetObservers sets who looks on; they are called in this order. Only between steps.
func (s *Simulation) SetObservers(list ...Observer) {
	s.observers = list
	for i := range s.species {
		for c := range s.species[i].chunks {
			if out := s.species[i].chunks[c].outcome; out != nil {
				out.KeepEvents = len(list) > 0
			}
		}
	}
}

// SetWorkers sets how many workers share the chunks; results do not depend on it.
func (s *Simulation) SetWorkers(n int) {
	n = max(1, min(n, s.config.Chunks))
	averages := s.pendingField()
	absorbed, charge := s.absorbedNow(), s.chargeNow()
	s.workers = make([]*worker, n)
	for i := range s.workers {
		s.workers[i] = newWorker(i, &s.config, len(s.species))
		s.workers[i].step, s.workers[i].circuit = s.step, charge
	}
	s.setPendingField(averages)
	s.workers[0].absorbed[s.step&1] = absorbed
	s.sync = newBarrier(n)
	s.redeposit()
}

func newWorker(index int, c *Config, species int) *worker {
	nodes := c.Cells + 1
	w := &worker{
		index: index, net: make([]float64, nodes), rhs: make([]float64, nodes),
		phi: make([]float64, nodes), e: make([]float64, nodes),
		fieldA: make([]float64, c.Cells), fieldD: make([]float64, c.Cells),
		summed: make([]int64, species),
	}
	for range species {
		w.number = append(w.number, make([]float64, nodes))
		w.kick = append(w.kick, make([]kernels.Field, c.Cells))
		w.fieldSum = append(w.fieldSum, make([]kernels.Field, c.Cells))
		for side := range w.deposit {
			w.deposit[side] = append(w.deposit[side], make([]uint64, c.Cells))
		}
	}
	w.frame = Frame{Phi: w.phi, E: w.e, Number: w.number, FieldA: w.fieldA, FieldD: w.fieldD}
	return w
}

// redeposit finds the charge words of the current positions afresh.
func (s *Simulation) redeposit() {
	side := s.step & 1
	for i := range s.species {
		for _, w := range s.workers {
			clear(w.deposit[side][i])
		}
		for c := range s.species[i].chunks {
			w := s.workers[c%len(s.workers)]
			kernels.Deposit(s.species[i].chunks[c].x, w.deposit[side][i])
		}
	}
}

// Advance makes the given number of steps. It fails if the field stops being a number.
func (s *Simulation) Advance(steps int64) error {
	for i := range s.species {
		for c := range s.species[i].chunks {
			s.species[i].chunks[c].reserve()
		}
	}
	if s.step == 0 && steps > 0 {
		s.startLeapfrog()
	}
	s.stop = s.step + steps
	if err := s.workAll(); err != nil {
		return err
	}
	s.step = s.stop
	for _, w := range s.workers {
		s.moved += w.moved
		w.moved = 0
	}
	if err := s.checkDeposits(); err != nil {
		return err
	}
	if e := s.workers[0].e[0]; math.IsNaN(e) || math.IsInf(e, 0) {
		return fmt.Errorf("pic: the field is %g V/m at step %d: the run has diverged; "+
			"a shorter time step or finer grid is needed", e, s.step)
	}
	return nil
}

// workAll has every worker work up to s.stop. A single one works in the caller's thread, whose
// processor time is then that of the work.
func (s *Simulation) workAll() error {
	if len(s.workers) == 1 {
		s.work(s.workers[0])
		return nil
	}
	var group errgroup.Group
	for _, w := range s.workers {
		group.Go(func() error {
			runtime.LockOSThread()
			defer runtime.UnlockOSThread()
			s.work(w)
			return nil
		})
	}
	return group.Wait()
}

// checkDeposits makes sure that no cell's word comes near its end.
func (s *Simulation) checkDeposits() error {
	for i := range s.species {
		for _, w := range s.workers {
			for j, word := range w.deposit[s.step&1][i] {
				if n := kernels.Deposits(word); n > kernels.MaxDeposits/2 {
					return fmt.Errorf("pic: %d particles of %s in cell %d, want at most %d: "+
						"fewer particles or more cells are needed",
						n, s.species[i].Name, j, kernels.MaxDeposits/2)
				}
			}
		}
	}
	return nil
}

// work is one worker's part of the main loop. Every worker solves for the field itself, from the
// sum of all deposits, so that a step needs only one meeting.
func (s *Simulation) work(w *worker) {
	for w.step < s.stop {
		s.sumCharge(w, w.step)      // all workers' deposits -> rho
		s.solvePotential(w, w.step) // -phi'' = rho/eps0, phi[0] as the circuit has it
		s.passCurrent(w)            // through the circuit, to the electrode
		s.differentiate(w)          // E = -dphi/dx
		s.observe(w)                // read-only: diagnostics
		s.carryDensity(w)           // species that rest keep their deposit
		for c := w.index; c < s.config.Chunks; c += len(s.workers) {
			s.relax(w, c) // electrons with each other
			s.react(w, c) // pairs of charged particles
			for i := range s.species {
				if s.species[i].due(w.step) {
					s.collide(w, i, c) // null-collision Monte Carlo with the gas
					s.push(w, i, c)    // kick and drift
					s.absorb(w, i, c)  // electrodes: fluxes, secondary electrons
				}
			}
		}
		w.step++
		s.sync.wait(w.index)
		s.chargeElectrode(w) // what was absorbed stays, until a current takes it away
	}
}

// Step returns the number of steps made.
func (s *Simulation) Step() int64 { return s.step }

// Config returns the configuration, with the current weight.
func (s *Simulation) Config() Config { return s.config }

// Species returns the species.
func (s *Simulation) Species() []Species { return s.species }
