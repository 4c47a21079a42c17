// Command effects tells what each thing in the model of the Sandpiper is good
// for: it takes one after another away and prints how far the frequencies and
// the peaks at the gyro move:
//
//	go run ./jobs/sandpiper/effects
//
// Joints, faces and mounts are made rigid or left out and the modes solved
// again; laws of mounts, gyroscopic moments, residual vectors and the coupling
// of modes by damping are left out of the response to the modes as they are.
package main

import (
	"context"
	"flag"
	"fmt"
	"os"
	"path/filepath"
)

func main() {
	size := flag.String("mesh_size", "5 mm", "target edge length of the mesh")
	flag.Parse()
	if err := run(context.Background(), *size); err != nil {
		fmt.Fprintln(os.Stderr, "effects:", err)
		os.Exit(1)
	}
}

func run(ctx context.Context, size string) error {
	m, p, err := load(ctx, filepath.Join("jobs", "sandpiper", "effects", "frame.hcl"), size)
	if err != nil {
		return err
	}
	base, err := solve(ctx, m, p)
	if err != nil {
		return err
	}
	nominal, err := base.respond(ctx, usual)
	if err != nil {
		return err
	}
	fmt.Println("without                       greatest change of a mode      strongest peaks, Hz (level against nominal, dB)")
	print("(nominal)", "", nominal, nominal)
	for _, v := range structural {
		other, err := v.apply(ctx, m, p)
		if err != nil {
			return fmt.Errorf("%s: %w", v.name, err)
		}
		r, err := other.respond(ctx, usual)
		if err != nil {
			return fmt.Errorf("%s: %w", v.name, err)
		}
		print(v.name, base.compare(other).String(), r, nominal)
	}
	for _, v := range dynamic {
		r, err := base.respond(ctx, v.how)
		if err != nil {
			return fmt.Errorf("%s: %w", v.name, err)
		}
		print(v.name, "", r, nominal)
	}
	return nil
}

var axes = [3]string{"roll", "pitch", "yaw"}

// print shows the strongest peaks of each axis beside those of the nominal frame.
func print(name, modes string, r, nominal response) {
	for axis := range 3 {
		if axis > 0 {
			name, modes = "", ""
		}
		line := fmt.Sprintf("%-28s  %-29s  %-5s", name, modes, axes[axis])
		for _, p := range strongest(r[axis], 3) {
			line += fmt.Sprintf("  %6.1f (%+5.1f)", p.frequency, p.level-nominal.near(axis, p))
		}
		fmt.Println(line)
	}
}
