package pic

// observe shows the step to the observers: the circuit to each, the particles to those that are
// due.
func (s *Simulation) observe(w *worker) {
	w.frame.Step, w.frame.Weight = w.step, s.config.Weight
	if w.index == 0 {
		c := s.measureCurrent(w, w.step)
		for _, o := range s.observers {
			o.Step(c)
		}
	}
	for _, o := range s.observers {
		if !o.Due(w.step) {
			continue
		}
		for i := range s.species {
			for c := w.index; c < s.config.Chunks; c += len(s.workers) {
				ch := &s.species[i].chunks[c]
				o.Particles(&w.frame, i, c, Particles{ch.x, ch.vx, ch.vy, ch.vz})
			}
		}
		s.sync.wait(w.index)
		o.Reduce(&w.frame, w.index, len(s.workers))
		s.sync.wait(w.index) // the next one may not write what this one still adds up
	}
}
