package plugintest

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"math/rand"
	"os"
	"path/filepath"
	"slices"
	"testing"
	"testing/iotest"
	"time"

	"hushframe/core/extension"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/stage"
	"hushframe/core/signal/recording"
)

// Recording is one recording that a reader must read, with what is known of it.
type Recording struct {
	Name    string
	Data    []byte
	Options stage.Arguments
	// Time names the time column and TimeUnit its unit in seconds, for a recording that has one.
	Time     string
	TimeUnit float64
	// Units are those that the reader must state, by column.
	Units map[string]string
	// Rate is the sample rate between gaps, Hz, to within a hundredth; 0 is not checked.
	Rate float64
	// Rows and Gaps are how many there are; -1 is not checked.
	Rows, Gaps int
	// Mean holds the mean of some columns over all samples, to within a part in a thousand of the largest.
	Mean map[string]float64
	// Vary holds other right values of options, besides those that the suite thinks of.
	Vary map[string][]any
	// Inert names options that change nothing for this recording, each with the reason.
	Inert map[string]string
}

// Reader reports each problem of a recording reader as an error of the test.
func Reader(t *testing.T, r extension.Reader, recordings ...Recording) {
	t.Helper()
	for _, p := range CheckReader(t.TempDir(), r, recordings...) {
		t.Error(p)
	}
}

// CheckReader lists the problems of a recording reader, working below an empty folder. What is wanted:
//
//   - a description that is complete, constant and survives the boundary;
//   - options as Check wants arguments: what is wrong is refused by a job, what is right changes what is read of a
//     recording, of one cut short or of one with a hurt byte, or is refused by name;
//   - columns with their units, the rate and the gaps as the recording has them, in batches of neighbouring rows;
//   - the same samples whatever the portions in which the source comes, and whatever columns are asked for;
//   - of a recording cut short anywhere, its whole rows or an error about the recording; no panic on any bytes;
//   - the error of the caller returned as it is, and cancellation obeyed in a second.
func CheckReader(folder string, r extension.Reader, recordings ...Recording) []string {
	problems := checkExtension(r.Describe(), r.Describe(), extension.ReaderKind)
	if len(problems) > 0 {
		return problems
	}
	if len(recordings) == 0 {
		return []string{"no recording to read was given; the suite needs at least one"}
	}
	heeds := map[string]*heeded{}
	for i, c := range recordings {
		if c.Name == "" {
			c.Name = fmt.Sprint("recording ", i+1)
		}
		c.Options = withDefaults(r.Describe().Arguments, c.Options)
		x := &readerCase{reader: r, Recording: c, path: filepath.Join(folder, fmt.Sprint(i))}
		x.check()
		if len(x.problems) == 0 {
			x.checkOptions(heeds)
		}
		problems = append(problems, x.problems...)
	}
	if len(problems) > 0 {
		return problems // what changes nothing might be a consequence
	}
	for _, a := range r.Describe().Arguments {
		if p := heeds[a.Name].verdict("option", a); p != "" {
			problems = append(problems, p)
		}
	}
	return problems
}

type readerCase struct {
	Recording
	reader   extension.Reader
	path     string // of a file, for a reader in another process
	problems []string
	columns  []string // that hold numbers
	whole    *samples
}

func (c *readerCase) bad(format string, args ...any) {
	c.problems = append(c.problems, c.Name+": "+fmt.Sprintf(format, args...))
}

// samples are all rows of a recording.
type samples struct {
	time   []float64
	values [][]float64
	notes  []string
	told   []recording.Finding
}

// source gives the bytes as a reader of this process or of another gets them.
func (c *readerCase) source(data []byte) (io.Reader, func(), error) {
	if !extension.ReadsFiles(c.reader) {
		return bytes.NewReader(data), func() {}, nil
	}
	if err := os.WriteFile(c.path, data, 0o644); err != nil {
		return nil, nil, err
	}
	f, err := os.Open(c.path)
	return f, func() { f.Close() }, err
}

// guard turns a panic of the reader into an error.
func guard(f func() error) (err error) {
	defer func() {
		if r := recover(); r != nil {
			err = panicked{r}
		}
	}()
	return f()
}

type panicked struct{ value any }

func (p panicked) Error() string { return fmt.Sprintf("a panic: %v", p.value) }

func (c *readerCase) inspect(source io.Reader) (h recording.Header, err error) {
	err = guard(func() error {
		h, err = c.reader.Inspect(context.Background(), source, c.Options)
		return err
	})
	return h, err
}

func (c *readerCase) read(ctx context.Context, source io.Reader, columns []string) (*samples, error) {
	s := &samples{values: make([][]float64, len(columns))}
	next := int64(1)
	err := guard(func() error {
		return c.reader.Read(ctx, source, c.Options, recording.Request{Columns: columns, Time: c.Time, TimeUnit: c.TimeUnit}, func(b recording.Batch) error {
			if b.First != next {
				return fmt.Errorf("a batch begins at row %d, where row %d is due; rows count from 1, without a break", b.First, next)
			}
			next += int64(b.Rows())
			if len(b.Values) != len(columns) {
				return fmt.Errorf("a batch has %d columns, %d were asked for", len(b.Values), len(columns))
			}
			s.time = append(s.time, b.Time...)
			for i, v := range b.Values {
				if len(v) != b.Rows() {
					return fmt.Errorf("a batch of %d rows has %d values of column %q", b.Rows(), len(v), columns[i])
				}
				s.values[i] = append(s.values[i], v...)
			}
			s.notes = append(s.notes, b.Notes...)
			s.told = append(s.told, b.Findings...)
			return nil
		})
	})
	return s, err
}

// again reads the whole recording through a source of another manner.
func (c *readerCase) again(data []byte, columns []string, wrap func(io.Reader) io.Reader) (*samples, error) {
	source, done, err := c.source(data)
	if err != nil {
		return nil, err
	}
	defer done()
	if wrap != nil {
		source = wrap(source)
	}
	return c.read(context.Background(), source, columns)
}

func (c *readerCase) check() {
	source, done, err := c.source(c.Data)
	if err != nil {
		c.bad("%v", err)
		return
	}
	h, err := c.inspect(source)
	done()
	if err != nil {
		c.bad("inspect gives %v", err)
		return
	}
	seen := map[string]bool{}
	timed := h.Timed
	for _, col := range h.Columns {
		if col.Name == "" || seen[col.Name] {
			c.bad("the column name %q is empty or there twice; jobs name columns", col.Name)
		}
		seen[col.Name] = true
		if want, ok := c.Units[col.Name]; ok && col.Unit != want {
			c.bad("column %q is stated in %q, where the recording has %q", col.Name, col.Unit, want)
		}
		if !col.Text && col.Name != c.Time {
			c.columns = append(c.columns, col.Name)
		}
	}
	for _, name := range sortedKeys(c.Units) {
		if !seen[name] {
			c.bad("there is no column %q, which the recording has", name)
		}
	}
	if len(c.columns) == 0 {
		c.bad("no column holds numbers")
		return
	}
	if c.whole, err = c.again(c.Data, c.columns, nil); err != nil {
		c.bad("read gives %v", err)
		return
	}
	c.checkTimes(h, timed)
	c.checkMeans()
	c.checkPortions()
	c.checkColumns()
	c.checkCut()
	c.checkCaller()
}

func (c *readerCase) checkTimes(h recording.Header, timed bool) {
	n := len(c.whole.values[0])
	if c.Rows >= 0 && n != c.Rows {
		c.bad("it gives %d rows, where the recording has %d", n, c.Rows)
	}
	switch {
	case c.Time != "" || timed:
		if len(c.whole.time) != n {
			c.bad("it gives %d times for %d rows", len(c.whole.time), n)
			return
		}
		if n > 0 && math.Abs(c.whole.time[0]) > 0 {
			c.bad("the time of the first row is %g s; times count from the first row, and Origin holds where that is", c.whole.time[0])
		}
		if n < 3 {
			return
		}
		timing, err := recording.Analyse(c.whole.time)
		if err != nil {
			c.bad("its times make no recording: %v", err)
			return
		}
		if c.Rate > 0 && math.Abs(timing.Rate/c.Rate-1) > 0.01 {
			c.bad("the rate between gaps is %.6g Hz, where the recording has %.6g Hz; are times in seconds?", timing.Rate, c.Rate)
		}
		if c.Gaps >= 0 && len(timing.Gaps) != c.Gaps {
			c.bad("it shows %d gaps, where the recording has %d; a gap is a step in the times, and samples lost must not close up", len(timing.Gaps), c.Gaps)
		}
	case c.Rate > 0 && math.Abs(h.Rate/c.Rate-1) > 1e-9:
		c.bad("the header states a rate of %g Hz, where the recording has %g Hz", h.Rate, c.Rate)
	}
}

func (c *readerCase) checkMeans() {
	for _, name := range sortedKeys(c.Mean) {
		i := slices.Index(c.columns, name)
		if i < 0 {
			c.bad("no column %q holds numbers", name)
			continue
		}
		sum, count, largest := 0.0, 0, 0.0
		for _, v := range c.whole.values[i] {
			if !math.IsNaN(v) {
				sum, count, largest = sum+v, count+1, max(largest, math.Abs(v))
			}
		}
		if mean := sum / float64(count); !(math.Abs(mean-c.Mean[name]) <= 1e-3*largest+1e-12) {
			c.bad("the mean of column %q is %.6g, not %.6g; are its factor and its unit right?", name, mean, c.Mean[name])
		}
	}
}

// same compares bit for bit, NaN equal to NaN.
func same(a, b *samples) bool { return fmt.Sprint(a.time, a.values) == fmt.Sprint(b.time, b.values) }

func (c *readerCase) checkPortions() {
	if again, err := c.again(c.Data, c.columns, nil); err != nil || !same(again, c.whole) {
		c.bad("a second reading gives other samples (%v)", err)
	}
	if extension.ReadsFiles(c.reader) {
		return // it opens the file itself
	}
	portions := map[string]func(io.Reader) io.Reader{"one byte at a time": iotest.OneByteReader, "half of what is asked": iotest.HalfReader, "data together with the end": iotest.DataErrReader}
	for _, name := range sortedKeys(portions) {
		if again, err := c.again(c.Data, c.columns, portions[name]); err != nil || !same(again, c.whole) {
			c.bad("a source that gives %s leads to other samples (%v); use io.ReadFull or bufio", name, err)
		}
	}
	broken := errors.New("the disk is on fire")
	_, err := c.again(c.Data, c.columns, func(r io.Reader) io.Reader {
		return io.MultiReader(io.LimitReader(r, int64(len(c.Data)/2)), iotest.ErrReader(broken))
	})
	if err == nil {
		c.bad("a source that fails half-way is read as if it had ended; an error other than io.EOF must be returned")
	}
}

func (c *readerCase) checkColumns() {
	last := len(c.columns) - 1
	some, err := c.again(c.Data, []string{c.columns[last], c.columns[0]}, nil)
	if err != nil || !same(some, &samples{time: c.whole.time, values: [][]float64{c.whole.values[last], c.whole.values[0]}}) {
		c.bad("columns asked for alone and in another order hold other samples (%v)", err)
	}
	if _, err := c.again(c.Data, []string{"no such column"}, nil); err == nil {
		c.bad("a column that is not there is read without an error")
	}
}

// checkCut reads beginnings of the recording and bytes of no meaning.
func (c *readerCase) checkCut() {
	n := len(c.Data)
	cuts := []int{0, 1, 3, 7, n / 7, n / 3, n / 2, 2 * n / 3, n - 9, n - 5, n - 2, n - 1}
	for _, at := range cuts {
		if at < 0 || at >= n {
			continue
		}
		part, err := c.again(c.Data[:at], c.columns, nil)
		if err != nil {
			c.checkError(fmt.Sprintf("cut after %d of %d bytes", at, n), err)
			continue
		}
		rows := len(part.values[0])
		if rows == 0 {
			c.bad("cut after %d of %d bytes it gives no row and no error", at, n)
		}
		if rows > len(c.whole.values[0]) {
			c.bad("cut after %d of %d bytes it gives %d rows, more than the whole", at, n, rows)
			continue
		}
		for i := range part.values {
			if fmt.Sprint(part.values[i]) != fmt.Sprint(c.whole.values[i][:rows]) {
				c.bad("cut after %d of %d bytes column %q holds other samples than the whole; leave out a row that is not whole", at, n, c.columns[i])
				break
			}
		}
		if rows < len(c.whole.values[0]) && rows > 0 && len(part.notes) == 0 && at > n-10 {
			c.bad("cut after %d of %d bytes a row is left out without a note", at, n)
		}
	}
	chance := rand.New(rand.NewSource(1))
	for k := range 40 {
		data := slices.Clone(c.Data)
		if k%4 == 0 {
			chance.Read(data)
		} else {
			for range 1 + k {
				data[chance.Intn(min(n, 512))] = byte(chance.Intn(256))
			}
		}
		if _, err := c.again(data, c.columns, nil); err != nil {
			c.checkError(fmt.Sprintf("damaged bytes (try %d)", k), err)
		}
	}
}

// checkError wants an error about the recording.
func (c *readerCase) checkError(when string, err error) {
	var r *recording.Error
	if errors.As(err, &r) {
		if r.Text == "" {
			c.bad("%s: an error without a text", when)
		}
		return
	}
	if kind := fault.KindOf(err); kind != fault.Input && kind != fault.Limit {
		c.bad("%s: %v; an error about the recording must be a *recording.Error, which says where and what to do", when, err)
	}
}

func (c *readerCase) checkCaller() {
	stop := errors.New("enough")
	source, done, err := c.source(c.Data)
	if err != nil {
		return
	}
	defer done()
	request := recording.Request{Columns: c.columns, Time: c.Time, TimeUnit: c.TimeUnit}
	if err := c.reader.Read(context.Background(), source, c.Options, request, func(recording.Batch) error { return stop }); err != stop {
		c.bad("the caller ended the reading with an error of its own, and got back %v", err)
	}
	ended, cancel := context.WithCancel(context.Background())
	cancel()
	source, done, err = c.source(c.Data)
	if err != nil {
		return
	}
	defer done()
	began := time.Now()
	_, err = c.read(ended, source, c.columns)
	if fault.KindOf(err) != fault.Cancelled || time.Since(began) > time.Second {
		c.bad("with a context that has ended it gives %v, not the error of the context; look at ctx.Err() before each batch", err)
	}
}

func sortedKeys[V any](m map[string]V) []string {
	var keys []string
	for k := range m {
		keys = append(keys, k)
	}
	slices.Sort(keys)
	return keys
}
