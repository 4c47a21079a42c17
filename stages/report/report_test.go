package report

import (
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/base64"
	"encoding/csv"
	"encoding/xml"
	"html"
	"io"
	"math"
	"regexp"
	"strings"
	"testing"

	"hushframe/core/pipeline/artifact"
	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/run/account"
	"hushframe/core/pipeline/stage"
	"hushframe/stages/kinds"
	"hushframe/stages/report/front"
)

func render(t testing.TB, c *content) (string, *kinds.Document) {
	t.Helper()
	d, err := compose(c, "", "page.html")
	if err != nil {
		t.Fatal(err)
	}
	return string(d.Files["page.html"]), d
}

// still gives the page without its moving part, and what is embedded for that; it fails the test if the latter could
// end the element that it stands in.
func still(t *testing.T, page string) (rest, data string) {
	t.Helper()
	const start, end = `<script type="application/json" id="scene-data">`, "</script>"
	before, after, ok := strings.Cut(page, start)
	data, after, ended := strings.Cut(after, end)
	script := "<script>" + front.Script + end
	if !ok || !ended || strings.ContainsAny(data, "<>&") || strings.Count(after, script) != 1 {
		t.Fatal("the moving part does not stand on the page as it should")
	}
	return before + strings.Replace(after, script, "", 1), data
}

func TestPageShowsWhatIsIncluded(t *testing.T) {
	whole, d := render(t, sampleContent(t))
	for _, want := range []string{
		"1 of 2 requirements is broken", "pitch-modes-apart", "margin −12.7 Hz", "sweep.beyond-modes",
		`id="frame"`, "frame from above", "frame from the right side", "All-up mass 612.3 g",
		`id="modes"`, "Mode 4 at 232.0", "Shape of mode 1 at 141.3", "enlarged to the same largest displacement",
		`id="response"`, "prediction × 2.40 (+3.8 dB), one factor for this axis", "95 % confidence", "order 1", "Operating shapes",
		`id="comparison"`, "Paired peaks", "no recorded peak within reach", "order 1 of rotor fr",
		`id="recording"`, "104000", `id="model"`, "typical value, not measured", `id="cautions"`, "propellers off", "licensed practice",
		`id="run"`, "arm_thickness", "6fd1c0de", "job &#34;sandpiper-sample&#34;", `id="glossary"`,
	} {
		if !strings.Contains(whole, want) {
			t.Errorf("%q is missing", want)
		}
	}
	if len(d.Tables) < 20 {
		t.Errorf("only %d tables", len(d.Tables))
	}
	for section, drop := range map[string]func(c *content){
		`id="recording"`:   func(c *content) { c.spectra = nil },
		`id="comparison"`:  func(c *content) { c.comparison = nil },
		`id="model"`:       func(c *content) { c.properties = nil },
		"frame from above": func(c *content) { c.geometry = nil },
		"Shape of mode":    func(c *content) { c.mesh = nil },
		`id="modes"`:       func(c *content) { c.modes = nil },
		"arm_thickness":    func(c *content) { c.run = nil },
		`id="response"`:    func(c *content) { c.response, c.comparison = nil, nil },
	} {
		c := sampleContent(t)
		drop(c)
		if page, _ := render(t, c); strings.Contains(page, section) {
			t.Errorf("%s is shown without what it needs", section)
		}
	}
	if page, d := render(t, &content{}); !strings.Contains(page, "Vibration report") || len(d.Tables) != 0 {
		t.Error("the empty page is not empty")
	}
}

func TestVerdictInWords(t *testing.T) {
	hold, broken, open := account.Verdict{Holds: true, Judged: true}, account.Verdict{Judged: true}, account.Verdict{}
	for want, list := range map[string][]account.Verdict{
		"Nothing was required": nil, "The requirement holds": {hold}, "The requirement is broken": {broken},
		"All 2 requirements hold": {hold, hold}, "1 of 2 requirements is broken": {hold, broken}, "2 of 2 requirements are broken": {broken, broken},
		"1 of 2 requirements could not be judged": {hold, open}, "1 of 3 requirements is broken": {hold, broken, open},
	} {
		if got := judge(list); got.Words != want {
			t.Errorf("got %q, want %q", got.Words, want)
		}
	}
}

// A page must not reach for anything outside itself, nor run anything.
func TestPageIsSelfContained(t *testing.T) {
	page, _ := render(t, sampleContent(t))
	sum := sha256.Sum256([]byte(front.Script))
	if !strings.Contains(html.UnescapeString(page), "script-src 'sha256-"+base64.StdEncoding.EncodeToString(sum[:])+"'\"") {
		t.Error("the policy of the page allows other scripts than its own")
	}
	page, _ = still(t, page)
	page = strings.ReplaceAll(page, `xmlns="http://www.w3.org/2000/svg"`, "") // a name, not a place
	outside := regexp.MustCompile(`(?i)<script|<link|<img|<iframe|<object|\bsrc=|@import|javascript:|\bon[a-z]+=|url\([^#]|https?:`)
	if found := outside.FindAllString(page, -1); len(found) > 0 {
		t.Errorf("the page has %q", found)
	}
	for _, ref := range regexp.MustCompile(`href="([^"]*)"`).FindAllStringSubmatch(page, -1) {
		if !strings.HasPrefix(ref[1], "#") && !strings.HasPrefix(ref[1], "page-tables/") {
			t.Errorf("the page refers to %q", ref[1])
		}
	}
	ids := map[string]bool{}
	for _, id := range regexp.MustCompile(`\bid="([^"]*)"`).FindAllStringSubmatch(page, -1) {
		if ids[id[1]] {
			t.Errorf("the id %q is used twice", id[1])
		}
		ids[id[1]] = true
	}
	for _, ref := range regexp.MustCompile(`href="#([^"]*)"`).FindAllStringSubmatch(page, -1) {
		if !ids[ref[1]] {
			t.Errorf("nothing on the page is called %q", ref[1])
		}
	}
	if strings.Contains(page, "ZgotmplZ") {
		t.Error("the template refused a value")
	}
	pictures := regexp.MustCompile(`(?s)<svg.*?</svg>`).FindAllString(page, -1)
	if len(pictures) < 14 {
		t.Errorf("only %d pictures", len(pictures))
	}
	for _, svg := range pictures {
		d := xml.NewDecoder(strings.NewReader(svg))
		for {
			if _, err := d.Token(); err == io.EOF {
				break
			} else if err != nil {
				t.Fatalf("%v in %.200s", err, svg)
			}
		}
		if !strings.Contains(svg, "aria-hidden") && !strings.Contains(svg, `aria-label="`) && !strings.Contains(svg, "<title>") {
			t.Errorf("a picture has no text in its place: %.200s", svg)
		}
	}
}

// Every text that comes from outside is shown as text.
func TestHostileTextsAreEscaped(t *testing.T) {
	const bad = `"><script>alert(1)</script><b onmouseover=x>&`
	c := sampleContent(t)
	c.run.Job, c.run.About, c.run.Program = bad, bad, bad
	c.run.Sources[0] = account.Source{Name: bad, Text: bad}
	c.run.Settings[0] = account.Setting{Name: bad, Value: bad, About: bad}
	c.run.Verdicts[0] = account.Verdict{Name: bad, Because: bad, Shown: bad, Value: bad, Bound: bad, Margin: bad}
	c.run.Executables[0] = account.Executable{Name: bad, Version: bad, SHA256: bad}
	c.run.Files[0] = account.File{Step: bad, Path: bad, SHA256: bad}
	c.run.Warnings[0] = account.Warning{Step: bad, ID: bad, Text: bad, Where: bad, Remedy: bad}
	c.run.Steps[0] = account.Step{Label: bad, Stage: bad, About: bad, State: bad}
	c.run.Notes[0] = account.Note{Step: bad, Text: bad}
	c.sources = []kinds.DocumentSource{{Kind: "modes", From: bad, Hash: bad}}
	c.geometry.Plates[0].Name = bad
	c.properties.Bodies[0].Name, c.properties.Materials[0].Origin, c.properties.Plates[0].Plate = bad, bad, bad
	c.properties.Joints[0].Name, c.properties.Rotors[0].Name = bad, bad
	c.modes.Survey.Modes[0].Part, c.modes.Survey.Modes[0].Motion, c.modes.Survey.Groups[0], c.modes.Survey.Rotors[1] = bad, bad, bad, bad
	c.response.Peaks[0].Rotor, c.response.Peaks[0].Losses[0], c.response.Shapes[0].Rotor, c.response.Lines[0].Rotor = bad, bad, bad, bad
	c.comparison.Unpaired[0].Reason, c.comparison.Notes[0] = bad, bad
	c.spectra.Axes[0].Column, c.spectra.Window, c.spectra.Rotors[0].Rotor = bad, bad, bad
	page, _ := render(t, c)
	page, data := still(t, page)
	if strings.Count(data, "alert(1)") < 5 {
		t.Error("the text is not in the moving part")
	}
	if n := strings.Count(page, "alert(1)"); n < 30 {
		t.Errorf("the text is shown %d times only", n)
	}
	if strings.Contains(page, "<script") || strings.Contains(page, "<b onmouseover") {
		t.Error("a text from outside became markup")
	}
}

func TestSameContentSameBytes(t *testing.T) {
	_, a := render(t, sampleContent(t))
	_, b := render(t, sampleContent(t))
	if len(a.Files) != len(b.Files) {
		t.Fatalf("%d files, then %d", len(a.Files), len(b.Files))
	}
	for name := range a.Files {
		if !bytes.Equal(a.Files[name], b.Files[name]) {
			t.Errorf("%s differs", name)
		}
	}
}

func TestTablesBesideThePage(t *testing.T) {
	page, d := render(t, sampleContent(t))
	for _, x := range d.Tables {
		rows, err := csv.NewReader(bytes.NewReader(d.Files[x.File])).ReadAll()
		if err != nil {
			t.Errorf("%s: %v", x.File, err)
			continue
		}
		if len(rows) != x.Rows+1 || x.Rows == 0 {
			t.Errorf("%s has %d lines for %d rows", x.File, len(rows), x.Rows)
		}
		if !strings.Contains(page, `href="`+x.File+`"`) {
			t.Errorf("%s has no link on the page", x.File)
		}
	}
	if n := strings.Count(page, "<table>"); n != len(d.Tables) {
		t.Errorf("%d tables on the page, %d beside it", n, len(d.Tables))
	}
	modes := string(d.Files["page-tables/modes.csv"])
	if !strings.HasPrefix(modes, "mode,frequency [Hz],damping ratio [%],") || !strings.Contains(modes, "\n4,232,1.2,twist of clamp,") {
		t.Errorf("modes.csv begins %.200s", modes)
	}
}

// The sample has two posts of 1.2 g with four screws of 0.7 g, and two bolts of 1.1 g.
func TestMassesGroupWhatIsAlike(t *testing.T) {
	_, d := render(t, sampleContent(t))
	masses := string(d.Files["page-tables/masses.csv"])
	for _, line := range []string{"standoff post,2,aluminium,2.4,", "screws of standoff post,4,,2.8,"} {
		if !strings.Contains(masses, "\n"+line) {
			t.Errorf("no line %q in\n%s", line, masses)
		}
	}
	c := sampleContent(t)
	c.geometry = nil // it alone knows which bolts belong together
	_, d = render(t, c)
	if masses := string(d.Files["page-tables/masses.csv"]); !strings.Contains(masses, "\nbolts,2,,2.2,") {
		t.Errorf("no line of both bolts in\n%s", masses)
	}
}

// In the sample every order 1 equals the frequency; mode 5 alone is near hover, mode 7 at 466 Hz within range.
func TestOrdersMetHaveALinePerMode(t *testing.T) {
	c := sampleContent(t)
	c.modes.Survey.Modes[0].Meetings[0].Rotors = []int{0, 2}
	_, d := render(t, c)
	orders := string(d.Files["page-tables/orders-met.csv"])
	for _, line := range []string{
		"mode,frequency [Hz],order 1 [rpm],order 2 [rpm],blade passing [rpm],near hover",
		"1,141.3,\"8478 (fl, rl)\",,2826,", "5,301.7,18102,,6034,order 1",
	} {
		if !strings.Contains(orders, line+"\n") {
			t.Errorf("no line %q in\n%s", line, orders)
		}
	}
}

func TestFieldsAreNoFormulas(t *testing.T) {
	table := &table{Columns: []column{{"a", "", false}}}
	for _, s := range []string{"=1+1", "@x", "+cmd", "-2.5", "-x", "plain", "a,\"b\"\nc"} {
		table.Rows = append(table.Rows, []cell{words(s)})
	}
	rows, err := csv.NewReader(bytes.NewReader(table.csv())).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	want := []string{"a", "'=1+1", "'@x", "'+cmd", "-2.5", "'-x", "plain", "a,\"b\"\nc"}
	for i, row := range rows {
		if row[0] != want[i] {
			t.Errorf("got %q, want %q", row[0], want[i])
		}
	}
}

func TestNumbersInWords(t *testing.T) {
	for _, x := range []struct{ got, want string }{
		{number(-1.25, 1).Text, "−1.2"}, {number(math.NaN(), 1).Text, "–"}, {number(math.NaN(), 1).Raw, ""},
		{signed(0.004, 2).Text, "0.00"}, {signed(-0.004, 2).Text, "0.00"}, {signed(3.21, 1).Text, "+3.2"}, {signed(-3.21, 1).Text, "−3.2"},
		{digits(0, 3).Text, "0"}, {digits(12345, 3).Text, "12345"}, {digits(1.5e-6, 2).Text, "1.5·10⁻⁶"}, {digits(-2.5e7, 3).Text, "−2.50·10⁷"},
		{digits(0.0123456, 3).Text, "0.0123"}, {digits(math.Inf(1), 3).Text, "∞"}, {plain(2000, 7).Text, "2000"}, {plain(1.953125, 4).Text, "1.953"},
		{percent(0.0123, 2).Text, "1.23"}, {percent(0.0123, 2).Raw, "1.23"}, {share("arm fr", 0.404), "arm\u00a0fr\u00a040\u00a0%"},
	} {
		if x.got != x.want {
			t.Errorf("got %q, want %q", x.got, x.want)
		}
	}
}

// The stage reads artifacts and writes one; nothing else goes in or out.
func TestStage(t *testing.T) {
	c := sampleContent(t)
	call := &stage.Call{
		Arguments: stage.Arguments{"to": `out\hover.html`, "title": "Hover & more"},
		Inputs: map[string][]stage.Input{"include": {
			put(t, kinds.EncodeGeometry(c.geometry), "stage.frame.geometry"), put(t, kinds.EncodeProperties(c.properties), "stage.frame.properties"),
			put(t, kinds.EncodeMesh(c.mesh), "stage.shells.mesh"), put(t, kinds.EncodeModes(c.modes), "stage.modes.modes"),
			put(t, kinds.EncodeResponse(c.response), "stage.flight.response"), put(t, kinds.EncodeSpectra(c.spectra), "stage.hover.spectra"),
			put(t, kinds.EncodeComparison(c.comparison), "stage.check.comparison"),
		}, "run": {put(t, c.run.Encode(), "run")}},
		Outputs: map[string]string{"document": t.TempDir()}, Report: silent{},
	}
	out, err := Stage{}.Run(context.Background(), call)
	if err != nil {
		t.Fatal(err)
	}
	if len(out.Notes) != 1 || len(out.Warnings) != 0 {
		t.Errorf("outcome %+v", out)
	}
	a, err := artifact.Open(call.Outputs["document"], kinds.Registry())
	if err != nil {
		t.Fatal(err)
	}
	d, err := kinds.DecodeDocument(a)
	if err != nil {
		t.Fatal(err)
	}
	if d.Title != "Hover & more" || d.Page != "hover.html" || len(d.Sources) != 8 || d.Sources[3].From != "stage.modes.modes" {
		t.Errorf("document %q on %q from %+v", d.Title, d.Page, d.Sources)
	}
	if page := string(d.Files["hover.html"]); !strings.Contains(page, ">Hover &amp; more</h1>") || !strings.Contains(page, "stage.check.comparison") {
		t.Error("the page lacks its title or sources")
	}

	call.Inputs["include"] = append(call.Inputs["include"], put(t, kinds.EncodeModes(c.modes), "stage.other.modes"))
	_, err = Stage{}.Run(context.Background(), call)
	if f := fault.From(err); err == nil || f.Kind != fault.Input || f.Argument != "include" || f.Item != "stage.other.modes" {
		t.Errorf("two modes: %v", err)
	}
	call.Inputs["include"] = []stage.Input{put(t, kinds.EncodeDocument(d), "stage.page.document")}
	if _, err = (Stage{}).Run(context.Background(), call); fault.KindOf(err) != fault.Input {
		t.Errorf("a document in a report: %v", err)
	}
	call.Inputs["include"] = nil
	for _, to := range []string{"", "airframe.hcl", "page"} {
		call.Arguments["to"] = to
		if _, err = (Stage{}).Run(context.Background(), call); fault.From(err).Argument != "to" {
			t.Errorf("written to %q: %v", to, err)
		}
	}
}
