package run

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io/fs"
	"math"
	"strings"
	"time"

	"ionfall/crosssections"
	"ionfall/internal/codec"
	"ionfall/internal/store"
)

const (
	checkpointKind    = "ionfall-run"
	checkpointVersion = 1
)

// save writes the whole state, so that resume goes on from this very step.
func (m *machine) save() error {
	m.clock()
	enc := codec.NewEncoder(checkpointKind, checkpointVersion)
	control, err := json.Marshal(&m.control)
	if err != nil {
		return fmt.Errorf("run: the state cannot be written: %w", err)
	}
	history, err := json.Marshal(m.history)
	if err != nil {
		return fmt.Errorf("run: the history cannot be written: %w", err)
	}
	enc.String("name", m.plan.Name)
	enc.Bytes("input", m.plan.Input)
	enc.String("gases", m.plan.gasHashes())
	if err := m.saveOwn(enc); err != nil {
		return err
	}
	enc.Bytes("control", control)
	enc.Bytes("history", history)
	m.sim.Save(enc, "sim.")
	m.rec.Save(enc, "rec.")
	m.meter.Save(enc, "meter.")
	if m.plan.trace != nil {
		enc.Bytes("trace", m.plan.trace.Source)
	}
	if err := m.folder.WriteCheckpoint(enc); err != nil {
		return err
	}
	m.saved = time.Now()
	return m.folder.WriteJSON("state.json", m.state())
}

// saveOwn keeps the user's gases, in the checkpoint and beside it.
func (m *machine) saveOwn(enc *codec.Encoder) error {
	if len(m.plan.ownFiles) == 0 {
		return nil
	}
	files, err := json.Marshal(m.plan.ownFiles)
	if err != nil {
		return fmt.Errorf("run: the gas library cannot be written: %w", err)
	}
	enc.Bytes("library", files)
	return m.plan.writeOwn(m.folder)
}

func restoreOwn(dec *codec.Decoder) (crosssections.Files, error) {
	if !dec.Has("library") {
		return nil, nil
	}
	var files crosssections.Files
	if err := strictJSON(dec.Bytes("library"), &files); err != nil {
		return nil, err
	}
	for name := range files {
		if !fs.ValidPath(name) || strings.Count(name, "/") != 1 {
			return nil, fmt.Errorf("the gas library in it has the file %q", name)
		}
	}
	return files, dec.Err()
}

// gasHashes identifies the cross sections: a run must not go on with others.
func (p *Plan) gasHashes() string {
	text := ""
	for _, g := range p.Gases {
		text += g.Name + "/" + g.Set + " " + g.SHA256 + "\n"
	}
	return text
}

// clock moves the time used by this process into the control.
func (m *machine) clock() {
	now, cpu := time.Now(), m.cpuSeconds()
	m.control.Wall += now.Sub(m.started).Seconds()
	m.control.CPU += cpu - m.cpuAtOpen
	m.started, m.cpuAtOpen = now, cpu
}

// restore builds a machine from the folder's checkpoint.
func restore(folder *store.Run, o Options) (*machine, error) {
	data, err := folder.ReadCheckpoint()
	if err != nil {
		return nil, fmt.Errorf("no checkpoint to continue from: %w", err)
	}
	bad := func(err error) error {
		return fmt.Errorf("%s cannot be continued from: %w", folder.Path(store.CheckpointFile), err)
	}
	dec, err := codec.Decode(checkpointKind, checkpointVersion, data)
	if err != nil {
		return nil, bad(err)
	}
	name, input, gases := dec.String("name"), dec.Bytes("input"), dec.String("gases")
	control, history := dec.Bytes("control"), dec.Bytes("history")
	if err := dec.Err(); err != nil {
		return nil, bad(err)
	}
	own, err := restoreOwn(dec)
	if err != nil {
		return nil, bad(err)
	}
	var trace []byte
	if dec.Has("trace") {
		trace = dec.Bytes("trace")
	}
	plan, err := prepareKept(name, input, own, trace)
	if err != nil {
		return nil, bad(err)
	}
	if plan.gasHashes() != gases {
		return nil, bad(fmt.Errorf("it was made with other cross sections:\n%snow they are\n%s",
			gases, plan.gasHashes()))
	}
	m := newMachine(plan, folder, o)
	if err := strictJSON(control, &m.control); err != nil {
		return nil, bad(err)
	}
	if err := strictJSON(history, &m.history); err != nil {
		return nil, bad(err)
	}
	c := m.control
	n := c.Numerics
	if n.Cells < 1 || n.StepsPerPeriod < 1 || n.IonSubsteps < 1 || n.Chunks < 1 {
		return nil, bad(fmt.Errorf("numerics %+v are impossible", n))
	}
	s, err := m.simulation(n, 1)
	if err != nil {
		return nil, bad(err)
	}
	if err := m.resumeDrive(s); err != nil {
		return nil, bad(err)
	}
	m.crew = newCrew(s, o.cores())
	if err := s.Restore(dec, "sim."); err != nil {
		return nil, bad(err)
	}
	m.sim = s
	m.rec = m.newRecorder()
	if err := m.rec.Restore(dec, "rec."); err != nil {
		return nil, bad(err)
	}
	if err := m.meter.Restore(dec, "meter."); err != nil {
		return nil, bad(err)
	}
	return m, nil
}

func strictJSON(data []byte, v any) error {
	d := json.NewDecoder(bytes.NewReader(data))
	d.DisallowUnknownFields()
	return d.Decode(v)
}

// liveState is state.json: what a viewer or a scan may know of a run in progress.
type liveState struct {
	Stage       string       `json:"stage"`
	Periods     int          `json:"periods"`
	Particles   int64        `json:"particles"`
	EnergyEV    store.Number `json:"ion_mean_energy_eV"`
	EnergyErrEV store.Number `json:"ion_mean_energy_eV_se"`
	Flux        store.Number `json:"ion_flux_m2ps"`
	FluxErr     store.Number `json:"ion_flux_m2ps_se"`
	WallS       float64      `json:"wall_s"`
	CPUS        float64      `json:"cpu_s"`
	RemainingS  float64      `json:"remaining_s"`
	Updated     string       `json:"updated"`
}

func (m *machine) state() liveState {
	s := m.status()
	return liveState{
		Stage: s.Stage, Periods: s.Periods, Particles: s.Particles,
		EnergyEV: store.Number(s.EnergyEV), EnergyErrEV: store.Number(s.EnergyErrEV),
		Flux: store.Number(s.Flux), FluxErr: store.Number(s.FluxErr),
		WallS: m.control.Wall, CPUS: m.control.CPU,
		RemainingS: math.Max(-1, s.Remaining.Seconds()),
		Updated:    time.Now().UTC().Format(time.RFC3339),
	}
}
