package artifact

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
)

var sample = Kind{
	Name: "sample", Version: 3, About: "one column of every type", Files: "anything",
	Scalars: []Column{
		{Name: "mass", Type: Float, Unit: "kg"}, {Name: "limit", Type: Float, Unit: "Hz"},
		{Name: "count", Type: Int, Unit: "1"}, {Name: "title", Type: Text}, {Name: "closed", Type: Truth},
	},
	Tables: []TableSpec{
		{Name: "all", Columns: []Column{
			{Name: "x", Type: Float, Unit: "m"}, {Name: "n", Type: Int}, {Name: "name", Type: Text}, {Name: "on", Type: Truth},
			{Name: "xs", Type: FloatList, Unit: "rad"}, {Name: "ns", Type: IntList}, {Name: "names", Type: TextList},
		}},
		{Name: "none", Columns: []Column{{Name: "x", Type: Float, Unit: "m"}, {Name: "names", Type: TextList}}},
	},
}

var samples = NewRegistry(sample)

func filled() *Artifact {
	a := New(sample)
	a.Scalars = map[string]any{"mass": 0.25, "limit": math.Inf(1), "count": int64(math.MinInt64), "title": "Frame \"A\"\n·", "closed": true}
	a.Table("all").
		Set("x", []float64{1.5, math.NaN(), math.Copysign(0, -1)}).
		Set("n", []int64{-1, 0, math.MaxInt64}).
		Set("name", []string{"", "µm", "arm_fr"}).
		Set("on", []bool{true, false, true}).
		Set("xs", [][]float64{{}, {1, 2}, {3}}).
		Set("ns", [][]int64{{7}, {}, {8, 9}}).
		Set("names", [][]string{{"a", ""}, {}, {"b"}})
	a.Files = map[string][]byte{"page.html": []byte("<p>"), "tables/modes.csv": {}}
	return a
}

func TestWriteOpen(t *testing.T) {
	dir := t.TempDir()
	a := filled()
	hash, err := Write(dir, a)
	if err != nil {
		t.Fatal(err)
	}
	b, err := Open(dir, samples)
	if err != nil {
		t.Fatal(err)
	}
	if b.Hash() != hash || len(hash) != 64 {
		t.Errorf("hash read %s, written %s", b.Hash(), hash)
	}
	if !reflect.DeepEqual(a.Scalars, b.Scalars) {
		t.Errorf("scalars read %v, written %v", b.Scalars, a.Scalars)
	}
	if fmt.Sprint(a.Tables["all"].columns) != fmt.Sprint(b.Tables["all"].columns) {
		t.Errorf("read %v, written %v", b.Tables["all"].columns, a.Tables["all"].columns)
	}
	if !math.Signbit(b.Table("all").Floats("x")[2]) {
		t.Error("the sign of zero is lost")
	}
	if got := b.Table("none").Rows(); got != 0 {
		t.Errorf("the empty table has %d rows", got)
	}
	if string(b.Files["page.html"]) != "<p>" || len(b.Files) != 2 {
		t.Errorf("files read %q", b.Files)
	}
	if err := Present(dir, hash); err != nil {
		t.Error(err)
	}
	if err := Present(dir, strings.Repeat("0", 64)); fault.KindOf(err) != fault.Protocol {
		t.Errorf("another hash: %v", err)
	}
}

func TestEqualArtifactsGiveEqualBytes(t *testing.T) {
	one, two := t.TempDir(), t.TempDir()
	if _, err := Write(one, filled()); err != nil {
		t.Fatal(err)
	}
	if _, err := Write(two, filled()); err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{ManifestName, "all.arrow", "none.arrow", "files/page.html"} {
		x, _ := os.ReadFile(filepath.Join(one, name))
		y, _ := os.ReadFile(filepath.Join(two, name))
		if len(x) == 0 || !bytes.Equal(x, y) {
			t.Errorf("%s: %d and %d bytes differ", name, len(x), len(y))
		}
	}
}

// Every part of the content must move the hash; two parts that only trade
// places between neighbours must too.
func TestHashCoversEverything(t *testing.T) {
	changes := map[string]func(*Artifact){
		"nothing":      func(a *Artifact) {},
		"version":      func(a *Artifact) { a.Kind.Version++ },
		"scalar":       func(a *Artifact) { a.Scalars["mass"] = 0.3 },
		"scalar text":  func(a *Artifact) { a.Scalars["title"] = "" },
		"float":        func(a *Artifact) { a.Table("all").Floats("x")[0] = math.Nextafter(1.5, 2) },
		"int":          func(a *Artifact) { a.Table("all").Ints("n")[1] = 1 },
		"truth":        func(a *Artifact) { a.Table("all").Truths("on")[1] = true },
		"text moved":   func(a *Artifact) { a.Table("all").Set("name", []string{"µ", "m", "arm_fr"}) },
		"list moved":   func(a *Artifact) { a.Table("all").Set("xs", [][]float64{{1}, {2}, {3}}) },
		"texts moved":  func(a *Artifact) { a.Table("all").Set("names", [][]string{{"a"}, {""}, {"b"}}) },
		"ints moved":   func(a *Artifact) { a.Table("all").Set("ns", [][]int64{{7}, {8}, {9}}) },
		"file":         func(a *Artifact) { a.Files["page.html"] = []byte("<p") },
		"file renamed": func(a *Artifact) { a.Files["page.htm"] = a.Files["page.html"]; delete(a.Files, "page.html") },
	}
	seen := map[string]string{}
	for name, change := range changes {
		a := filled()
		change(a)
		if other, dup := seen[a.Hash()]; dup {
			t.Errorf("%s and %s have one hash", name, other)
		}
		seen[a.Hash()] = name
	}
	a, b := filled(), filled()
	b.Table("all").Floats("x")[1] = math.Float64frombits(0xfff8000000000123)
	if a.Hash() != b.Hash() {
		t.Error("the payload of a NaN moved the hash")
	}
}

func TestOpenRefuses(t *testing.T) {
	edit := func(old, new string) func(dir string) {
		return func(dir string) {
			place := filepath.Join(dir, ManifestName)
			data, _ := os.ReadFile(place)
			if !bytes.Contains(data, []byte(old)) {
				panic("the manifest has no " + old)
			}
			os.WriteFile(place, bytes.Replace(data, []byte(old), []byte(new), 1), 0o644)
		}
	}
	table := func(spec TableSpec, name string, fill func(*Table)) func(string) {
		return func(dir string) {
			tab := &Table{Spec: spec, columns: map[string]any{}}
			fill(tab)
			data, err := EncodeTable(tab)
			if err != nil {
				panic(err)
			}
			os.WriteFile(filepath.Join(dir, name), data, 0o644)
			m, _ := ReadManifest(dir)
			m.Hash, m.Tables["none"] = "", Entry{}
			os.WriteFile(filepath.Join(dir, ManifestName), m.encode(), 0o644)
		}
	}
	names := Column{Name: "names", Type: TextList}
	cases := []struct {
		name  string
		spoil func(dir string)
		want  string
	}{
		{"unknown kind", edit(`"sample"`, `"other"`), `"other" is not known`},
		{"other version", edit(`"version": 3`, `"version": 4`), "version 4, this program reads version 3"},
		{"other unit", edit(`"unit": "kg"`, `"unit": "g"`), `scalar mass has the unit "g", where the kind wants "kg"`},
		{"ill-typed scalar", edit(`"value": true`, `"value": 1`), "scalar closed is 1, where the kind wants truth"},
		{"null text", edit(`"value": "Frame \"A\"\n·"`, `"value": null`), "scalar title is null"},
		{"unknown scalar", edit(`"mass"`, `"bulk"`), "scalar bulk is not part of the kind"},
		{"unknown table", edit(`"none": {`, `"more": {`), "table more is not part of the kind"},
		{"changed value", edit("-9223372036854775808", "-9223372036854775807"), "does not match its hash"},
		{"path out of the folder", edit(`"page.html"`, `"../page.html"`), "no usable relative path"},
		{"no JSON", edit("{", "["), "cannot be understood"},
		{"missing table", func(d string) { os.Remove(filepath.Join(d, "all.arrow")) }, "all.arrow is missing"},
		{"cut table", func(d string) { os.Truncate(filepath.Join(d, "all.arrow"), 700) }, "700 bytes"},
		{"no table at all", func(d string) {
			os.Remove(filepath.Join(d, "all.arrow"))
			os.Mkdir(filepath.Join(d, "all.arrow"), 0o755)
		}, "no regular file"},
		{"column of another type", table(TableSpec{Name: "none", Columns: []Column{{Name: "x", Type: Int, Unit: "m"}, names}}, "none.arrow",
			func(*Table) {}), "column none.x is int64 in the file, where the kind wants float"},
		{"column of another unit", table(TableSpec{Name: "none", Columns: []Column{{Name: "x", Type: Float, Unit: "mm"}, names}}, "none.arrow",
			func(*Table) {}), `column none.x has the unit "mm" in the file`},
		{"list of another type", table(TableSpec{Name: "none", Columns: []Column{{Name: "x", Type: Float, Unit: "m"}, {Name: "names", Type: IntList}}}, "none.arrow",
			func(*Table) {}), "column none.names is list<item: int64"},
		{"missing column", table(TableSpec{Name: "none", Columns: []Column{names}}, "none.arrow", func(*Table) {}), "column none.x is missing"},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			dir := t.TempDir()
			if _, err := Write(dir, filled()); err != nil {
				t.Fatal(err)
			}
			c.spoil(dir)
			_, err := OpenExact(dir, samples)
			if fault.KindOf(err) != fault.Protocol || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got %v\nwant a protocol fault with %q", err, c.want)
			}
		})
	}
	if _, err := Open(t.TempDir(), samples); !errors.Is(err, &fault.Error{Kind: fault.Missing}) {
		t.Errorf("empty folder: %v", err)
	}
}

func TestWriteRefuses(t *testing.T) {
	cases := map[string]func(*Artifact){
		"scalar mass is missing":      func(a *Artifact) { delete(a.Scalars, "mass") },
		"column all.n is missing":     func(a *Artifact) { delete(a.Tables["all"].columns, "n") },
		"column all.n has 1 rows":     func(a *Artifact) { a.Table("all").Set("n", []int64{1}) },
		"no usable relative path":     func(a *Artifact) { a.Files["../x"] = nil },
		"row 1 is not UTF-8":          func(a *Artifact) { a.Table("all").Set("name", []string{"", "\xff", ""}) },
		"scalar count is float64":     func(a *Artifact) { a.Scalars["count"] = 1.0 },
		"table extra is not part":     func(a *Artifact) { a.Tables["extra"] = &Table{} },
		"kind carries no loose files": func(a *Artifact) { a.Kind.Files = "" },
	}
	for want, spoil := range cases {
		a := filled()
		spoil(a)
		dir := t.TempDir()
		if _, err := Write(dir, a); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want %q", err, want)
		}
		if _, err := os.Stat(filepath.Join(dir, ManifestName)); err == nil {
			t.Errorf("%s: a manifest was written", want)
		}
	}
}

// Damaged Arrow bytes give an error or a table that satisfies its spec, never
// a panic: bytes are changed at random, and files cut at every length.
func TestDamagedTables(t *testing.T) {
	tab := filled().Table("all")
	good, err := EncodeTable(tab)
	if err != nil {
		t.Fatal(err)
	}
	use := func(data []byte) error {
		got, err := DecodeTable(tab.Spec, data)
		if err == nil {
			a := New(sample)
			a.Tables["all"] = got
			a.Hash() // touches every value
		}
		return err
	}
	if err := use(good); err != nil {
		t.Fatal(err)
	}
	for n := range good {
		if err := use(append([]byte(nil), good[:n]...)); err == nil {
			t.Errorf("cut to %d of %d bytes and still read", n, len(good))
		}
	}
	rng := rand.New(rand.NewPCG(1, 2))
	refused := 0
	for range 20000 {
		bad := append([]byte(nil), good...)
		for range 1 + rng.IntN(3) {
			bad[rng.IntN(len(bad))] = byte(rng.UintN(256))
		}
		if use(bad) != nil {
			refused++
		}
	}
	if refused < 5000 {
		t.Errorf("only %d of 20000 damaged files were refused; the damage misses the file", refused)
	}
}

func BenchmarkWrite(b *testing.B) {
	kind := Kind{Name: "bench", Version: 1, Tables: []TableSpec{{Name: "shapes", Columns: []Column{{Name: "x", Type: Float, Unit: "m"}}}}}
	a := New(kind)
	x := make([]float64, 1<<21)
	for i := range x {
		x[i] = float64(i) * 0.1
	}
	a.Table("shapes").Set("x", x)
	b.SetBytes(int64(len(x) * 8))
	for b.Loop() {
		if _, err := Write(b.TempDir(), a); err != nil {
			b.Fatal(err)
		}
	}
}

// What a later version of a kind has more does not keep an earlier reader from what it knows.
func TestOpenLeavesOutWhatIsNew(t *testing.T) {
	old := sample
	old.Scalars = sample.Scalars[1:]
	old.Tables = []TableSpec{{Name: "all", Columns: sample.Tables[0].Columns[:2]}}
	dir := t.TempDir()
	if _, err := Write(dir, filled()); err != nil {
		t.Fatal(err)
	}
	a, err := Open(dir, NewRegistry(old))
	if err != nil {
		t.Fatal(err)
	}
	if a.Int("count") != math.MinInt64 || a.Table("all").Floats("x")[0] != 1.5 || len(a.Tables) != 1 || len(a.Scalars) != 4 {
		t.Errorf("it reads %v and %d tables", a.Scalars, len(a.Tables))
	}
	if _, err := OpenExact(dir, NewRegistry(old)); fault.KindOf(err) != fault.Protocol {
		t.Errorf("what is kept may hold more: %v", err)
	}
	// Damage is still found.
	path := filepath.Join(dir, "all.arrow")
	data, _ := os.ReadFile(path)
	data[len(data)/2] ^= 1
	if err := os.WriteFile(path, data, 0o644); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(dir, NewRegistry(old)); fault.KindOf(err) != fault.Protocol {
		t.Errorf("a changed byte: %v", err)
	}
}

func BenchmarkOpen(b *testing.B) {
	kind := Kind{Name: "bench", Version: 1, Tables: []TableSpec{{Name: "shapes", Columns: []Column{{Name: "x", Type: Float, Unit: "m"}}}}}
	a := New(kind)
	a.Table("shapes").Set("x", make([]float64, 1<<21))
	dir := b.TempDir()
	if _, err := Write(dir, a); err != nil {
		b.Fatal(err)
	}
	b.SetBytes(8 << 21)
	for b.Loop() {
		if _, err := Open(dir, NewRegistry(kind)); err != nil {
			b.Fatal(err)
		}
	}
}
