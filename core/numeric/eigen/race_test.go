package eigen_test

import (
	"bufio"
	"bytes"
	"cmp"
	"encoding/binary"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"runtime/debug"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"hushframe/core/numeric/eigen"
	"hushframe/core/numeric/sparse"
	"hushframe/core/numeric/trial"
)

// runner is a problem to race on.
type runner struct {
	name   string
	k, m   *sparse.Symmetric
	nodeOf []int32
	coords [][3]float64
}

func sheetRunner(name string, s trial.Sheet) runner {
	l := s.Lattice()
	return runner{name: name, k: l.K, m: l.M, nodeOf: l.NodeOf, coords: l.Coords}
}

const raceModes = 30

// lap is one timed solution.
type lap struct {
	Seconds, Factor float64
	CPU             float64 // seconds of processor time, less disturbed by others on the machine
	Values          []float64
	Bytes           int64 // most memory held above what was held before
	stats           eigen.Stats
	order           float64
}

// BenchmarkRace times the 30 lowest modes against SciPy and SLEPc, those of them that are installed, on the same matrices
// and the same shift, lap by lap in turn, and prints a table of the fastest laps; ratios are those of totals without the
// inertia count, which the others do not make. After several crosses it tells how time grows with size.
// The matrices are those of crosses, and of the folder that HUSHFRAME_RACE names, if any: K.mtx and M.mtx in the
// Matrix Market format (coordinate real symmetric).
//
//	apt-get install python3-scipy python3-petsc4py-real python3-slepc4py-real
//	go test -run XXX -bench Race -benchtime 3x -timeout 1h ./core/numeric/eigen
//
// HUSHFRAME_RACE_SIZES=20,50,100,200,400 chooses the crosses (thousands of unknowns), none when it is empty,
// HUSHFRAME_RACE_AGAINST="slepc cholmod" those whose names begin so.
func BenchmarkRace(b *testing.B) {
	var first, last growth
	for _, make := range runners(b) {
		r := make() // one at a time, as what is held decides how often memory is collected
		b.Run(fmt.Sprintf("%s/unknowns=%d", r.name, r.k.N), func(b *testing.B) {
			ours := race(b, r)
			if g := (growth{float64(r.k.N), ours.Seconds, ours.CPU}); r.nodeOf == nil {
				return // another shape
			} else if last = g; first.unknowns == 0 {
				first = g
			}
		})
	}
	if n := math.Log(last.unknowns / first.unknowns); n > 0 {
		fmt.Printf("from %.0f to %.0f unknowns time grows as n^%.2f, processor time as n^%.2f\n", first.unknowns, last.unknowns,
			math.Log(last.seconds/first.seconds)/n, math.Log(last.cpu/first.cpu)/n)
	}
}

// growth is one point of time over size.
type growth struct{ unknowns, seconds, cpu float64 }

// rival is another solver with a setting of it.
type rival struct {
	name, python, script string
	args                 []string // after the folder
	threads              int      // 0 leaves the library its own choice
	most                 int      // unknowns beyond which it would take minutes; 0 means no bound
}

// rivals are those that are installed, each with the settings found best for it.
func rivals(b *testing.B) (out []rival) {
	if python := pythonWith("scipy"); python == "" {
		b.Log("python3 with scipy is not installed: no comparison with it")
	} else {
		out = append(out,
			rival{name: "scipy plain", python: python, script: "race.py", args: []string{"plain"}, most: 60e3},
			rival{name: "scipy prepared", python: python, script: "race.py", args: []string{"prepared"}, most: 250e3},
			rival{name: "scipy loose", python: python, script: "race.py", args: []string{"loose"}, most: 120e3})
	}
	if python := pythonWith("runpy; runpy.run_path('testdata/race_slepc.py')"); python == "" {
		b.Log("python3 with petsc4py and slepc4py is not installed: no comparison with SLEPc")
	} else {
		for threads := 1; threads <= 2; threads++ {
			for _, how := range [][]string{{"cholmod", "external"}, {"mumps", "metis"}} {
				out = append(out, rival{name: fmt.Sprint("slepc ", how[0], " ", threads), python: python, script: "race_slepc.py", args: how, threads: threads})
			}
		}
	}
	against := os.Getenv("HUSHFRAME_RACE_AGAINST")
	return slices.DeleteFunc(out, func(o rival) bool { return !strings.HasPrefix(o.name, against) })
}

func runners(b *testing.B) (out []func() runner) {
	sizes, chosen := os.LookupEnv("HUSHFRAME_RACE_SIZES")
	if !chosen {
		sizes = "50"
	}
	for word := range strings.FieldsFuncSeq(sizes, func(r rune) bool { return r == ',' }) {
		thousands, err := strconv.Atoi(word)
		if err != nil {
			b.Fatal(err)
		}
		n := int(math.Round(90 * math.Sqrt(float64(thousands)/51)))
		out = append(out, func() runner {
			return sheetRunner("cross-"+word+"k", trial.Sheet{
				Nx: n, Ny: n, Cell: 0.27 / float64(n), Thick: 2e-3, Keep: trial.Cross(n, max(1, n*4/90)),
			})
		})
	}
	if folder := os.Getenv("HUSHFRAME_RACE"); folder != "" {
		out = append(out, func() runner {
			k, m := readMarket(b, filepath.Join(folder, "K.mtx")), readMarket(b, filepath.Join(folder, "M.mtx"))
			return runner{name: filepath.Base(folder), k: k, m: m}
		})
	}
	return out
}

func race(b *testing.B, r runner) (ours lap) {
	ctx := b.Context()
	pattern := sparse.Combine(1, r.k, 1, r.m).Pattern()
	// The shift is the one that the solver chooses by itself.
	first, err := eigen.Lowest(ctx, r.k, r.m, sparse.Order(pattern, r.nodeOf, r.coords), eigen.Options{Modes: raceModes})
	if err != nil {
		b.Fatal(err)
	}
	shift := first.Shift
	first = nil
	others := slices.DeleteFunc(rivals(b), func(o rival) bool { return o.most > 0 && r.k.N > o.most })
	folder := b.TempDir()
	writeRaw(b, folder, "k", r.k)
	writeRaw(b, folder, "m", r.m)
	bests := map[string]lap{}
	keep := func(name string, l lap) {
		if old, ok := bests[name]; !ok || l.Seconds < old.Seconds {
			bests[name] = l
		}
	}
	for b.Loop() {
		for threads := 1; threads <= 2; threads++ {
			keep(fmt.Sprint("ours-", threads), ourLap(b, r, shift, threads))
		}
		for _, o := range others {
			keep(o.name, o.lap(b, folder, shift))
		}
	}
	ours = bests["ours-2"]
	st := ours.stats
	b.ReportMetric(float64(st.Factor.Entries), "entries")
	b.ReportMetric(st.Factor.Flops/1e9, "GFLOP")
	var t strings.Builder
	fmt.Fprintf(&t, "\n%-15s %8s %8s %8s %8s %8s %8s %8s %8s | %8s %8s\n", "", "order", "analyse", "factor", "solves", "orthog.", "Ritz", "total", "cpu", "count", "MB")
	for threads := 1; threads <= 2; threads++ {
		o := bests[fmt.Sprint("ours-", threads)]
		st := o.stats
		fmt.Fprintf(&t, "%-15s %8.3f %8.3f %8.3f %8.3f %8.3f %8.3f %8.3f %8.3f | %8.3f %8.0f   %d solves, %.1f and %.1f GFLOP/s\n", fmt.Sprint("threads=", threads),
			o.order, st.Factor.AnalyseSeconds, st.FactorSeconds, st.SolveSeconds, st.OrthogonalSeconds, st.RitzSeconds, o.Seconds, o.CPU, st.CountSeconds, float64(o.Bytes)/1e6,
			st.Solves, st.Factor.Flops/st.FactorSeconds/1e9, 4*float64(st.Solves)*float64(st.Factor.Entries)/st.SolveSeconds/1e9)
	}
	best, leanest := math.Inf(1), math.Inf(1)
	for _, o := range others {
		l := bests[o.name]
		fmt.Fprintf(&t, "%-15s %8s %8s %8.3f %8s %8s %8s %8.3f %8.3f | %8s %8.0f   %.2f times ours, %.2f in processor time, %.2f in memory\n", o.name, "", "", l.Factor, "", "", "",
			l.Seconds, l.CPU, "", float64(l.Bytes)/1e6, l.Seconds/ours.Seconds, l.CPU/bests["ours-1"].CPU, float64(l.Bytes)/float64(ours.Bytes))
		best, leanest = min(best, l.Seconds), min(leanest, float64(l.Bytes))
		if len(l.Values) != len(ours.Values) {
			b.Errorf("%s: %d values, ours %d", o.name, len(l.Values), len(ours.Values))
			continue
		}
		for i, v := range ours.Values {
			// Rigid values are rounding in both.
			if want := l.Values[i]; math.Abs(v-want) > 1e-6*want && max(v, want) > 1e-3*l.Values[6] {
				b.Errorf("%s: value %d is %g, ours %g", o.name, i, want, v)
			}
		}
	}
	if len(others) > 0 {
		b.ReportMetric(ours.Seconds/best, "ours/best")
		b.ReportMetric(float64(ours.Bytes)/leanest, "memory/leanest")
	}
	fmt.Println(t.String()) // a benchmark's log is cut after ten lines
	return ours
}

// ourLap includes the ordering, as SciPy's laps do, and leaves out the count.
func ourLap(b *testing.B, r runner, shift float64, threads int) lap {
	debug.FreeOSMemory()
	held := resident("VmRSS:")
	_ = os.WriteFile("/proc/self/clear_refs", []byte("5"), 0) // forgets the peak, where there is such a thing
	began, busy := time.Now(), processor()
	order := sparse.Order(sparse.Combine(1, r.k, 1, r.m).Pattern(), r.nodeOf, r.coords)
	l := lap{order: time.Since(began).Seconds()}
	res, err := eigen.Lowest(b.Context(), r.k, r.m, order, eigen.Options{Modes: raceModes, Shift: shift, Threads: threads})
	if err != nil || !res.Status.Converged || !res.Status.Proved {
		b.Fatal(err, res)
	}
	l.Seconds = time.Since(began).Seconds() - res.Stats.CountSeconds
	l.CPU = (processor() - busy) * l.Seconds / (l.Seconds + res.Stats.CountSeconds)
	l.Bytes = resident("VmHWM:") - held
	l.Values, l.stats = res.Values, res.Stats
	return l
}

// processor is the processor time that this process has used, in seconds; 0 where it cannot be told. It comes in
// hundredths.
func processor() float64 {
	text, _ := os.ReadFile("/proc/self/stat")
	fields := strings.Fields(string(text))
	if len(fields) < 15 {
		return 0
	}
	user, _ := strconv.ParseFloat(fields[13], 64)
	system, _ := strconv.ParseFloat(fields[14], 64)
	return (user + system) / 100
}

// resident reads a line of the memory status of this process, in bytes; 0 where there is none.
func resident(key string) int64 {
	text, _ := os.ReadFile("/proc/self/status")
	_, after, _ := strings.Cut(string(text), key)
	fields := strings.Fields(after)
	if len(fields) == 0 {
		return 0
	}
	kb, _ := strconv.ParseInt(fields[0], 10, 64)
	return kb * 1024
}

func (o rival) lap(b *testing.B, folder string, shift float64) (l lap) {
	args := append([]string{filepath.Join("testdata", o.script), folder}, o.args...)
	cmd := exec.Command(o.python, append(args, strconv.Itoa(raceModes), strconv.FormatFloat(shift, 'g', -1, 64))...)
	// Settings that someone has made for another library's sake would slow it down.
	cmd.Env = slices.DeleteFunc(os.Environ(), func(v string) bool { return strings.HasPrefix(v, "OPENBLAS_") || strings.HasPrefix(v, "OMP_") })
	if o.threads > 0 {
		cmd.Env = append(cmd.Env, fmt.Sprint("OMP_NUM_THREADS=", o.threads))
	}
	cmd.Stderr = os.Stderr
	text, err := cmd.Output()
	if err != nil {
		b.Fatal(o.name, err)
	}
	if err := json.Unmarshal(text, &l); err != nil {
		b.Fatal(o.name, err)
	}
	return l
}

// writeRaw writes the arrays of a matrix: column starts (64 bits), rows (32 bits), values.
func writeRaw(b *testing.B, folder, name string, s *sparse.Symmetric) {
	ptr := make([]int64, len(s.Ptr))
	for i, v := range s.Ptr {
		ptr[i] = int64(v)
	}
	for suffix, data := range map[string]any{"ptr": ptr, "row": s.Row, "val": s.Val} {
		var buf bytes.Buffer
		if err := binary.Write(&buf, binary.LittleEndian, data); err != nil {
			b.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(folder, name+"."+suffix), buf.Bytes(), 0o600); err != nil {
			b.Fatal(err)
		}
	}
}

// readMarket reads the lower triangle of a symmetric matrix in the Matrix Market format. Diagonal entries that are not
// given are zero.
func readMarket(b *testing.B, name string) *sparse.Symmetric {
	file, err := os.Open(name)
	if err != nil {
		b.Fatal(err)
	}
	defer file.Close()
	type entry struct {
		row int32
		val float64
	}
	var columns [][]entry
	lines := bufio.NewScanner(file)
	for lines.Scan() {
		if strings.HasPrefix(lines.Text(), "%") {
			continue
		}
		var i, j int
		var v float64
		if columns == nil {
			if _, err := fmt.Sscan(lines.Text(), &i, &j); err != nil || i != j {
				b.Fatalf("%s: bad size: %v", name, err)
			}
			columns = make([][]entry, i)
			for j := range columns {
				columns[j] = []entry{{int32(j), 0}}
			}
			continue
		}
		f := strings.Fields(lines.Text())
		i, _ = strconv.Atoi(f[0])
		j, _ = strconv.Atoi(f[1])
		if v, err = strconv.ParseFloat(f[2], 64); err != nil {
			b.Fatal(err)
		}
		i, j = max(i, j)-1, min(i, j)-1
		if i == j {
			columns[j][0].val = v
			continue
		}
		columns[j] = append(columns[j], entry{int32(i), v})
	}
	s := &sparse.Symmetric{N: len(columns), Ptr: make([]int, len(columns)+1)}
	for j, c := range columns {
		slices.SortFunc(c, func(x, y entry) int { return cmp.Compare(x.row, y.row) })
		for _, e := range c {
			s.Row, s.Val = append(s.Row, e.row), append(s.Val, e.val)
		}
		s.Ptr[j+1] = len(s.Row)
	}
	if err := s.Check(); err != nil {
		b.Fatal(err)
	}
	return s
}
