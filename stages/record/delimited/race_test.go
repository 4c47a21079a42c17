//go:build unix

package delimited

import (
	"bufio"
	"bytes"
	"context"
	"fmt"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"syscall"
	"testing"
	"time"

	"hushframe/core/signal/recording"
)

// flightText writes rows of a recording at 2 kHz with nine columns, about 57 bytes each.
func flightText(path string, rows int) error {
	f, err := os.Create(path)
	if err != nil {
		return err
	}
	defer f.Close()
	random := rand.New(rand.NewPCG(1, 1))
	out := bufio.NewWriterSize(f, 1<<20)
	out.WriteString("time_us,gx,gy,gz,throttle_pct,rpm_1,rpm_2,rpm_3,rpm_4\n")
	var line []byte
	for i := range rows {
		line = strconv.AppendInt(line[:0], 4_000_000+int64(i)*500, 10)
		for range 3 {
			line = strconv.AppendFloat(append(line, ','), random.NormFloat64()*20, 'f', 2, 64)
		}
		line = strconv.AppendFloat(append(line, ','), 31, 'f', 1, 64)
		for range 4 {
			line = strconv.AppendFloat(append(line, ','), 16000+500*random.NormFloat64(), 'f', 0, 64)
		}
		out.Write(append(line, '\n'))
	}
	return out.Flush()
}

// processorTime is that of this process, which others on the machine disturb less than the clock on the wall.
func processorTime() float64 {
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		return 0
	}
	return float64(u.Utime.Sec+u.Stime.Sec) + float64(u.Utime.Usec+u.Stime.Usec)/1e6
}

const pandasLaps = `
import sys, time
import pandas
columns = ["time_us", "gx", "gy", "gz", "rpm_1", "rpm_2", "rpm_3", "rpm_4"]
for line in sys.stdin:
    wall, busy = time.perf_counter(), time.process_time()
    table = pandas.read_csv(sys.argv[1], usecols=columns, engine="c")
    print(time.perf_counter() - wall, time.process_time() - busy, len(table), table["gx"].sum(), flush=True)
`

// BenchmarkRace reads the same file of a million rows with this reader and with the C reader of pandas, lap by lap in turn, where pandas is
// installed (apt-get install python3-pandas). Both keep eight of nine columns in memory.
//
//	go test -run XXX -bench Race -benchtime 1x ./stages/record/delimited
func BenchmarkRace(b *testing.B) {
	python := ""
	for _, p := range []string{"python3", "/usr/bin/python3"} {
		if exec.Command(p, "-c", "import pandas").Run() == nil {
			python = p
			break
		}
	}
	if python == "" {
		b.Skip("pandas is not installed, so there is nothing to race against")
	}
	const rows, laps = 1_000_000, 5
	path := filepath.Join(b.TempDir(), "flight.csv")
	if err := flightText(path, rows); err != nil {
		b.Fatal(err)
	}
	info, err := os.Stat(path)
	if err != nil {
		b.Fatal(err)
	}
	var complaints bytes.Buffer
	other := exec.Command(python, "-c", pandasLaps, path)
	other.Stderr = &complaints
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
	best := [2][2]float64{{1e9, 1e9}, {1e9, 1e9}} // ours and theirs, wall and processor
	for b.Loop() {
		for range laps {
			wall, busy := time.Now(), processorTime()
			n, sum := 0, 0.0
			kept := make([][]float64, 8)
			f, err := os.Open(path)
			if err != nil {
				b.Fatal(err)
			}
			err = Reader{}.Read(context.Background(), f, recording.Request{Columns: []string{"gx", "gy", "gz", "rpm_1", "rpm_2", "rpm_3", "rpm_4"}, Time: "time_us", TimeUnit: 1e-6}, func(c recording.Batch) error {
				n += c.Rows()
				for k, v := range append(c.Values, c.Time) {
					kept[k] = append(kept[k], v...)
				}
				return nil
			})
			f.Close()
			if err != nil {
				b.Fatal(err)
			}
			best[0][0], best[0][1] = min(best[0][0], time.Since(wall).Seconds()), min(best[0][1], processorTime()-busy)
			for _, v := range kept[0] {
				sum += v
			}
			fmt.Fprintln(in)
			if !lines.Scan() {
				b.Fatalf("pandas ended: %s", complaints.String())
			}
			words := strings.Fields(lines.Text())
			var theirs [4]float64
			for i := range theirs {
				if theirs[i], err = strconv.ParseFloat(words[i], 64); err != nil {
					b.Fatal(err)
				}
			}
			if int(theirs[2]) != n || n != rows || theirs[3]-sum > 1e-6*rows || sum-theirs[3] > 1e-6*rows {
				b.Fatalf("pandas has %g rows with sum %g, this reader %d and %g", theirs[2], theirs[3], n, sum)
			}
			best[1][0], best[1][1] = min(best[1][0], theirs[0]), min(best[1][1], theirs[1])
		}
	}
	size := float64(info.Size()) / 1e6
	for i, name := range []string{"ours", "pandas"} {
		fmt.Printf("%-7s %6.3f s wall %7.1f MB/s   %6.3f s processor %7.1f MB/s\n", name, best[i][0], size/best[i][0], best[i][1], size/best[i][1])
	}
	b.ReportMetric(best[1][0]/best[0][0], "times-as-fast-wall")
	b.ReportMetric(best[1][1]/best[0][1], "times-as-fast-processor")
}
