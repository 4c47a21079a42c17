//go:build unix

package spectrum

import (
	"bufio"
	"bytes"
	"encoding/binary"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"syscall"
	"testing"
	"time"
)

func processorTime() float64 {
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		return 0
	}
	return float64(u.Utime.Sec+u.Stime.Sec) + float64(u.Utime.Usec+u.Stime.Usec)/1e6
}

const scipyLaps = `
import sys, time
import numpy
from scipy.signal import welch
x = numpy.fromfile(sys.argv[1]).reshape(3, -1)
for line in sys.stdin:
    n = int(line)
    wall, busy = time.perf_counter(), time.process_time()
    f, p = welch(x, fs=2000, nperseg=n)
    print(time.perf_counter() - wall, time.process_time() - busy, repr(float(p[0, 7])), repr(float(p[2, -3])), flush=True)
`

// BenchmarkRace averages three axes of 120 s at 2 kHz (Hann, half overlap, means taken out) here and with scipy.signal.welch, lap by lap in
// turn, where SciPy is installed (apt-get install python3-scipy).
//
//	go test -run XXX -bench Race -benchtime 1x ./core/signal/spectrum
func BenchmarkRace(b *testing.B) {
	python := ""
	for _, p := range []string{"python3", "/usr/bin/python3"} {
		if exec.Command(p, "-c", "import scipy.signal").Run() == nil {
			python = p
			break
		}
	}
	if python == "" {
		b.Skip("SciPy is not installed, so there is nothing to race against")
	}
	const samples, laps = 240_000, 15
	var axes [3][]float64
	var packed bytes.Buffer
	for d := range axes {
		axes[d] = gauss(uint32(d+1), samples)
		if err := binary.Write(&packed, binary.NativeEndian, axes[d]); err != nil {
			b.Fatal(err)
		}
	}
	path := filepath.Join(b.TempDir(), "axes")
	if err := os.WriteFile(path, packed.Bytes(), 0o600); err != nil {
		b.Fatal(err)
	}
	other := exec.Command(python, "-c", scipyLaps, path)
	other.Stderr = os.Stderr
	in, err := other.StdinPipe()
	if err != nil {
		b.Fatal(err)
	}
	answers, err := other.StdoutPipe()
	if err != nil {
		b.Fatal(err)
	}
	if err := other.Start(); err != nil {
		b.Fatal(err)
	}
	defer other.Wait()
	defer in.Close()
	lines := bufio.NewScanner(answers)
	for _, n := range []int{1024, 2048, 4096, 8192, 4000} {
		best := [2][2]float64{{1e9, 1e9}, {1e9, 1e9}} // ours and theirs, wall and processor
		s := Settings{Rate: 2000, Segment: n, Overlap: n / 2}
		for range laps {
			wall, busy := time.Now(), processorTime()
			var powers [3]Power
			for d, x := range axes {
				if powers[d], err = Welch([][]float64{x}, s); err != nil {
					b.Fatal(err)
				}
			}
			best[0][0], best[0][1] = min(best[0][0], time.Since(wall).Seconds()), min(best[0][1], processorTime()-busy)
			fmt.Fprintln(in, n)
			if !lines.Scan() {
				b.Fatal("SciPy ended")
			}
			words := strings.Fields(lines.Text())
			var theirs [4]float64
			for i := range theirs {
				if theirs[i], err = strconv.ParseFloat(words[i], 64); err != nil {
					b.Fatal(err)
				}
			}
			for i, ours := range []float64{powers[0].Values[7], powers[2].Values[n/2-2]} {
				if math.Abs(ours-theirs[2+i]) > 1e-10*ours {
					b.Fatalf("%d samples a segment: %g here, %g there", n, ours, theirs[2+i])
				}
			}
			best[1][0], best[1][1] = min(best[1][0], theirs[0]), min(best[1][1], theirs[1])
		}
		fmt.Printf("segment %5d   ours %7.1f ms wall %7.1f ms processor   scipy %7.1f ms wall %7.1f ms processor   ratio %.2f wall %.2f processor\n", n,
			1e3*best[0][0], 1e3*best[0][1], 1e3*best[1][0], 1e3*best[1][1], best[1][0]/best[0][0], best[1][1]/best[0][1])
	}
}
