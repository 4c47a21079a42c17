// Command fly writes the flight recording of the Sandpiper and the truth
// behind it. It solves truth.hcl, flies that frame in the time domain with
// spinning rotors, and samples its gyro as a recorder would:
//
//	go run ./jobs/sandpiper/fly jobs/sandpiper/flights
//
// The physics differs from that of the nominal model on purpose: other
// moduli, masses, joints, pressed faces and mounts (airframe-truth.hcl), a finer mesh,
// gyroscopic moments, rotor speeds that wander, a control loop, sensor noise
// and filter. Equal inputs give equal bytes.
package main

import (
	"compress/gzip"
	"context"
	"encoding/json"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"runtime"

	"hushframe/core/mechanics/airframe"
	"hushframe/jobs/inprocess"
	"hushframe/stages/kinds"
)

func main() {
	job := flag.String("truth", filepath.Join("jobs", "sandpiper", "fly", "truth.hcl"), "job that solves the true frame")
	seed := flag.Uint64("seed", 20, "seed of forces and sensor noise; another one is another flight of the same frame")
	flag.Parse()
	folder := filepath.Join("jobs", "sandpiper", "flights")
	if flag.NArg() > 0 {
		folder = flag.Arg(0)
	}
	if err := fly(context.Background(), *job, folder, *seed); err != nil {
		fmt.Fprintln(os.Stderr, "fly:", err)
		os.Exit(1)
	}
}

// fly writes hover-03.csv.gz and hover-03-truth.json into the folder.
func fly(ctx context.Context, job, folder string, seed uint64) error {
	pl, p, err := truth(ctx, job)
	if err != nil {
		return err
	}
	if err := os.MkdirAll(folder, 0o755); err != nil {
		return err
	}
	about, err := describe(pl, p)
	if err != nil {
		return err
	}
	account, err := json.MarshalIndent(about, "", "  ")
	if err != nil {
		return err
	}
	if err := os.WriteFile(filepath.Join(folder, "hover-03-truth.json"), append(account, '\n'), 0o644); err != nil {
		return err
	}
	file, err := os.Create(filepath.Join(folder, "hover-03.csv.gz"))
	if err != nil {
		return err
	}
	defer file.Close()
	zip, err := gzip.NewWriterLevel(file, gzip.BestCompression)
	if err != nil {
		return err
	}
	if err := record(zip, pl, newSources(rotors(p), 1/stepRate, seed), seed); err != nil {
		return err
	}
	if err := zip.Close(); err != nil {
		return err
	}
	return file.Close()
}

// truth solves the true frame.
func truth(ctx context.Context, job string) (*plant, *airframe.Properties, error) {
	store, err := os.MkdirTemp("", "truth")
	if err != nil {
		return nil, nil, err
	}
	defer os.RemoveAll(store)
	done, err := inprocess.Run(ctx, job, store, nil)
	if err != nil {
		return nil, nil, err
	}
	a, err := done.Artifact("modes", "modes")
	if err != nil {
		return nil, nil, err
	}
	m, err := kinds.DecodeModes(a)
	if err != nil {
		return nil, nil, err
	}
	a, err = done.Artifact("frame", "properties")
	if err != nil {
		return nil, nil, err
	}
	p, err := kinds.DecodeProperties(a)
	if err != nil {
		return nil, nil, err
	}
	pl, err := newPlant(m.Basis, p, 1200)
	return pl, p, err
}

// rotors turns the rotors of the frame into those of the flight. The
// unbalance of each differs, below the grade that the frame allows for.
func rotors(p *airframe.Properties) []rotorState {
	share := []float64{0.35, 0.50, 0.28, 0.42}
	hover := []float64{0.985, 1.012, 1.0, 1.022}
	var out []rotorState
	for i, r := range p.Rotors {
		out = append(out, rotorState{
			x: r.Hub[0], y: r.Hub[1], spin: float64(r.Spin), blades: float64(r.Blades),
			hover:     r.HoverSpeed * hover[i%len(hover)],
			unbalance: share[i%len(share)] * r.SpinningMass * r.Grade / r.MaxSpeed,
		})
	}
	return out
}

// account is what is written beside the recording.
type account struct {
	About      string             `json:"about"`
	Modes      []trueMode         `json:"modes_at_hover_speed"`
	BestAfter  float64            `json:"best_errors_after_s"`
	Parameters map[string]any     `json:"parameters"`
	Rotors     []map[string]any   `json:"rotors"`
	Sources    map[string]float64 `json:"sources_si"`
	Recorder   map[string]float64 `json:"recorder_si"`
}

func describe(pl *plant, p *airframe.Properties) (account, error) {
	parameters := map[string]any{"loss_factor_floor": p.Floor}
	for _, m := range p.Materials {
		parameters["material "+m.Name] = map[string]float64{"E1_Pa": m.E1, "E2_Pa": m.E2, "G12_Pa": m.G12, "density_kg_m3": m.Density, "loss_factor": m.LossFactor}
	}
	for _, j := range p.Joints {
		parameters["joint "+j.Name] = map[string]any{"stiffness_N_m_and_Nm_rad": j.Stiffness, "per": string(j.Measure), "loss_factor": j.LossFactor}
	}
	for _, b := range p.Bodies {
		if b.Mount != nil {
			parameters["mount "+b.Mount.Name] = map[string]any{"stiffness_of_each_N_m": b.Mount.Points[0].Stiffness, "points": len(b.Mount.Points), "loss_factors": b.Mount.Loss, "law": string(b.Mount.Law.Kind)}
		}
	}
	terms := pl.terms()
	best, err := newProcess(terms, rotors(p)).best(runtime.GOMAXPROCS(0))
	if err != nil {
		return account{}, err
	}
	a := account{
		About:      "modes and parameters behind hover-03.csv.gz; hysteretic losses were turned into equivalent viscous ones for the simulation",
		Modes:      pl.modes(terms, best),
		BestAfter:  steady,
		Parameters: parameters,
		Sources: map[string]float64{
			"force_density_N2_Hz": forceDensity, "moment_density_N2m2_Hz": momentDensity, "blade_thrust_N": bladeThrust, "blade_side_force_N": bladeSide,
			"torque_ripple_Nm": torqueRipple, "torque_ripple_order": rippleOrder, "rate_loop_Hz": rateLoop, "loop_band_Hz": loopBand,
		},
		Recorder: map[string]float64{"rate_Hz": recordRate, "low_pass_Hz": lowPass, "noise_deg_s_per_root_Hz": noise, "supply_pickup_deg_s": pickup},
	}
	for i, r := range rotors(p) {
		a.Rotors = append(a.Rotors, map[string]any{"name": p.Rotors[i].Name, "mean_hover_rpm": math.Round(r.hover * 30 / math.Pi), "unbalance_kg_m": r.unbalance, "spin": r.spin})
	}
	return a, nil
}
