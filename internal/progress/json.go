package progress

import (
	"encoding/json"
	"fmt"
	"io"
	"math"
)

// NewJSON returns a printer of one JSON object a line and report. Numbers that are not known are
// null, units are at the end of the names.
func NewJSON(out io.Writer, pace Pace) Printer {
	return &paced{out: out, form: objects{}, pace: pace}
}

type objects struct{}

// object is a status in JSON.
type object struct {
	Stage      string   `json:"stage"`
	Periods    int      `json:"periods"`
	Particles  int64    `json:"particles"`
	Energy     *float64 `json:"ion_mean_energy_eV"`
	EnergyErr  *float64 `json:"ion_mean_energy_eV_se"`
	Flux       *float64 `json:"ion_flux_m2ps"`
	FluxErr    *float64 `json:"ion_flux_m2ps_se"`
	ElapsedS   float64  `json:"elapsed_s"`
	RemainingS *float64 `json:"remaining_s"`
	Event      string   `json:"event,omitempty"`
}

func (objects) report(s Status) string {
	o := object{
		Stage: s.Stage, Periods: s.Periods, Particles: s.Particles,
		Energy: finite(s.EnergyEV), EnergyErr: finite(s.EnergyErrEV),
		Flux: finite(s.Flux), FluxErr: finite(s.FluxErr),
		ElapsedS: s.Elapsed.Seconds(), Event: s.Event,
	}
	if s.Remaining >= 0 {
		o.RemainingS = finite(s.Remaining.Seconds())
	}
	line, err := json.Marshal(o)
	if err != nil {
		panic(fmt.Sprintf("progress: a status does not encode: %v", err))
	}
	return string(line) + "\n"
}

func (objects) clear() string   { return "" }
func (objects) restore() string { return "" }
func (objects) end() string     { return "" }

// finite is v, or nil where JSON has no number for it.
func finite(v float64) *float64 {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return nil
	}
	return &v
}
