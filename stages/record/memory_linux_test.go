package record

import (
	"bufio"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"hushframe/core/pipeline/stage"
)

// A process that describes a recording holds little beyond the samples themselves, whatever the size of the file: here 4 million rows of
// 36 bytes, 144 MB, of which five columns are kept.
func TestMemoryIsBounded(t *testing.T) {
	const rows, columns = 4_000_000, 5
	if folder := os.Getenv("HUSHFRAME_TEST_MEMORY"); folder != "" {
		s, _, err := run(t, folder, stage.Arguments{"file": "long.csv", "window": seconds(0, 1e6)})
		if err != nil || s.Samples != rows {
			t.Fatal(s, err)
		}
		status, err := os.ReadFile("/proc/self/status")
		if err != nil {
			t.Fatal(err)
		}
		for line := range strings.Lines(string(status)) {
			if strings.HasPrefix(line, "VmHWM") {
				fmt.Println(line)
			}
		}
		return
	}
	folder := t.TempDir()
	f, err := os.Create(filepath.Join(folder, "long.csv"))
	if err != nil {
		t.Fatal(err)
	}
	w := bufio.NewWriterSize(f, 1<<20)
	w.WriteString("time_us,gx_deg_s,gy_deg_s,gz_deg_s,rpm_1\n")
	var line []byte
	for i := range rows {
		line = strconv.AppendInt(line[:0], int64(i)*500, 10)
		for k := range 3 {
			line = strconv.AppendInt(append(line, ','), int64((i*(k+7)*7919)%1999), 10)
		}
		line = append(line, ",16000.0\n"...)
		w.Write(line)
	}
	if err := w.Flush(); err != nil {
		t.Fatal(err)
	}
	f.Close()
	child := exec.Command(os.Args[0], "-test.run=^TestMemoryIsBounded$")
	child.Env = append(os.Environ(), "HUSHFRAME_TEST_MEMORY="+folder)
	out, err := child.CombinedOutput()
	if err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	peak := 0
	for line := range strings.Lines(string(out)) {
		if fields := strings.Fields(line); len(fields) == 3 && fields[0] == "VmHWM:" {
			peak, _ = strconv.Atoi(fields[1])
		}
	}
	kept, beyond := rows*columns*8/1024, 230*1024 // KiB; the process itself takes about 60 MiB of what lies beyond
	t.Logf("%d MiB at most, %d MiB of them the samples", peak/1024, kept/1024)
	if peak == 0 || peak > kept+beyond {
		t.Errorf("%d MiB are held beyond the samples, %d are allowed", (peak-kept)/1024, beyond/1024)
	}
}
