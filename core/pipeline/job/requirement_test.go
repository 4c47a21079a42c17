package job_test

import (
	"context"
	"math"
	"strconv"
	"strings"
	"testing"

	"hushframe/core/pipeline/fault"
	"hushframe/core/pipeline/job"
	"hushframe/core/pipeline/job/jobtest"
	"hushframe/core/pipeline/quantity"
	"hushframe/core/pipeline/stage"
)

func hz(x float64) stage.Quantity { return stage.Quantity{SI: x, Dimension: "frequency"} }

func TestVerdicts(t *testing.T) {
	figures := job.Figures{
		"modes": {
			"smallest_gap_pitch": hz(23.4), "lowest": hz(math.NaN()), "count": 9.0, "strongest_part": "arm_fr",
			"modes": []any{map[string]any{"frequency": hz(150), "part": "arm", "gyro_pitch": 2.0}},
		},
		"frame": {"mass": stage.Quantity{SI: 0.4125, Dimension: "mass"}, "plates": 7.0},
	}
	for _, c := range []struct {
		name, body string
		want       job.Verdict
	}{
		{"at least, held", `figure = stage.modes.figures.smallest_gap_pitch
			at_least = "20 Hz"`,
			job.Verdict{Holds: true, Value: "23.4 Hz", Bound: "at least 20 Hz", Margin: "+3.4 Hz",
				Shown: "stage.modes.figures.smallest_gap_pitch = 23.4 Hz, at least 20 Hz"}},
		{"at least, broken, other unit", `figure = stage.modes.figures.smallest_gap_pitch
			at_least = "0.03 kHz"`,
			job.Verdict{Value: "23.4 Hz", Bound: "at least 30 Hz", Margin: "-6.6 Hz",
				Shown: "stage.modes.figures.smallest_gap_pitch = 23.4 Hz, at least 30 Hz"}},
		{"exactly at the bound", `figure = stage.modes.figures.count
			at_least = 9`,
			job.Verdict{Holds: true, Value: "9", Bound: "at least 9", Margin: "+0", Shown: "stage.modes.figures.count = 9, at least 9"}},
		{"at most", `figure = stage.frame.figures.mass
			at_most = "400 g"`,
			job.Verdict{Value: "412.5 g", Bound: "at most 400 g", Margin: "-12.5 g", Shown: "stage.frame.figures.mass = 412.5 g, at most 400 g"}},
		{"within, nearer to the upper end", `figure = stage.frame.figures.mass
			within = ["0.3 kg", "415 g"]`,
			job.Verdict{Holds: true, Value: "412.5 g", Bound: "within 300 g to 415 g", Margin: "+2.5 g",
				Shown: "stage.frame.figures.mass = 412.5 g, within 300 g to 415 g"}},
		{"equals", `figure = stage.modes.figures.count
			equals = 8`,
			job.Verdict{Value: "9", Bound: "equal to 8", Margin: "-1", Shown: "stage.modes.figures.count = 9, equal to 8"}},
		{"equals text", `figure = stage.modes.figures.strongest_part
			equals = "arm_${"fr"}"`,
			job.Verdict{Holds: true, Value: `"arm_fr"`, Bound: `equal to "arm_fr"`, Shown: `stage.modes.figures.strongest_part = "arm_fr", equal to "arm_fr"`}},
		{"no value", `figure = stage.modes.figures.lowest
			at_least = "20 Hz"`,
			job.Verdict{Value: "no value", Bound: "at least 20 Hz", Shown: "stage.modes.figures.lowest has no value in this run, at least 20 Hz"}},
		{"calculated", `figure = quantity(2 * number_in(stage.modes.figures.smallest_gap_pitch, "Hz"), "Hz")
			at_least = stage.modes.figures.smallest_gap_pitch`,
			job.Verdict{Holds: true, Value: "46.8 Hz", Bound: "at least 23.4 Hz", Margin: "+23.4 Hz",
				Shown: `quantity(2 * number_in(stage.modes.figures.smallest_gap_pitch, "Hz"), "Hz") = 46.8 Hz, at least 23.4 Hz`}},
		{"that", `that = stage.modes.figures.count >= setting.count && stage.modes.figures.smallest_gap_pitch < "20 Hz"`,
			job.Verdict{Shown: `stage.modes.figures.count >= setting.count && stage.modes.figures.smallest_gap_pitch < "20 Hz", ` +
				`with setting.count = 4, stage.modes.figures.count = 9, stage.modes.figures.smallest_gap_pitch = 23.4 Hz`}},
		{"that over a list", `that = all([for m in stage.modes.figures.modes : m.frequency > "100 Hz" && m.frequency == "0.15 kHz"])`,
			job.Verdict{Holds: true, Shown: `all([for m in stage.modes.figures.modes : m.frequency > "100 Hz" && m.frequency == "0.15 kHz"]), ` +
				`with stage.modes.figures.modes = [{frequency = "150 Hz", gyro_pitch = 2, part = "arm"}]`}},
		{"all of what is not known yet", `that = all([stage.modes.figures.count == 9, true])`,
			job.Verdict{Holds: true, Shown: `all([stage.modes.figures.count == 9, true]), with stage.modes.figures.count = 9`}},
		{"caught", `that = length(try([for m in stage.modes.figures.modes : m.nonsense], [])) == 0`,
			job.Verdict{Holds: true, Shown: `length(try([for m in stage.modes.figures.modes : m.nonsense], [])) == 0, ` +
				`with stage.modes.figures.modes = [{frequency = "150 Hz", gyro_pitch = 2, part = "arm"}]`}},
		{"null compares", `that = stage.modes.figures.lowest == null && stage.modes.figures.smallest_gap_pitch != null`,
			job.Verdict{Holds: true, Shown: `stage.modes.figures.lowest == null && stage.modes.figures.smallest_gap_pitch != null, ` +
				`with stage.modes.figures.lowest = no value, stage.modes.figures.smallest_gap_pitch = 23.4 Hz`}},
	} {
		t.Run(c.name, func(t *testing.T) {
			j, text := load(t, head+"requirement \"r\" {\n"+c.body+"\nbecause = \"so\"\n}\n", nil)
			if text != "" {
				t.Fatal(text)
			}
			r := j.Requirements[0]
			if v, diags := r.Judge(nil); diags.HasErrors() || v.Holds || v.Shown != "" {
				t.Errorf("before the run: %+v %v", v, diags)
			}
			got, diags := r.Judge(figures)
			if diags.HasErrors() {
				t.Fatal(diags)
			}
			c.want.Name, c.want.Because = "r", "so"
			// Long lists are cut when shown.
			if strings.HasSuffix(got.Shown, "...") {
				c.want.Shown = c.want.Shown[:len(got.Shown)-3] + "..."
			}
			// The numbers are those of the texts.
			if m := got.Measured; (m != nil) != (c.want.Margin != "") {
				t.Errorf("measured %+v beside the margin %q", m, c.want.Margin)
			} else if m != nil {
				for text, x := range map[string]float64{got.Value: m.Value, strings.TrimPrefix(got.Margin, "+"): m.Margin} {
					want := stage.Quantity{}
					if m.Dimension == "" {
						want.SI, _ = strconv.ParseFloat(text, 64)
					} else {
						want, _ = quantity.ParseAs(text, m.Dimension)
					}
					if math.Abs(x-want.SI) > 1e-12*math.Abs(want.SI)+1e-12 {
						t.Errorf("%g beside %q", x, text)
					}
				}
			}
			got.Measured = nil
			if got != c.want {
				t.Errorf("\n got %+v\nwant %+v", got, c.want)
			}
		})
	}
}

func TestFigureOfWrongType(t *testing.T) {
	j, _ := load(t, head+`requirement "r" {
  figure   = stage.modes.figures.count
  at_least = 3
}
`, nil)
	_, diags := j.Requirements[0].Judge(job.Figures{"modes": {"count": "nine"}})
	if !diags.HasErrors() || !strings.Contains(diags[0].Detail, `its figure count wrongly: it is a text where a whole number is declared`) {
		t.Errorf("got %v", diags)
	}
}

func TestDiagnose(t *testing.T) {
	j, text := load(t, head+`
stage "record" "hover" {
  file     = "flights/hover.csv"
  channels = {
    pitch = "-gy"
  }
}
`, nil)
	if text != "" {
		t.Fatal(text)
	}
	s := find(t, j, "hover")
	for _, c := range []struct {
		err  *fault.Error
		line int
		want string
	}{
		{fault.New(fault.Input, "there is no column %q", "gy").Of("channels.pitch").Do("columns are t and gx"), 18,
			`there is no column "gy"; columns are t and gx`},
		{&fault.Error{Text: "cannot read", Cause: fault.New(fault.Input, "not a number").At("line 3").Of("file")}, 16,
			"cannot read: line 3: not a number"},
		{fault.New(fault.Numeric, "no convergence").Of("window"), 15, "no convergence"},
	} {
		d := j.Diagnose(s, c.err)
		if len(d) != 1 || d[0].Subject.Start.Line != c.line || d[0].Detail != c.want {
			t.Errorf("got %v at %v, want %q on line %d", d[0].Detail, d[0].Subject, c.want, c.line)
		}
	}
	if j.Diagnose(s, nil) != nil {
		t.Error("no fault gives a diagnostic")
	}
}

func TestDescriptionsFromOutside(t *testing.T) {
	good := stage.Type{Kind: stage.Number}
	for _, c := range []struct {
		d    stage.Description
		want string
	}{
		{stage.Description{Arguments: []stage.Argument{{Name: "after", Type: good}}}, `the argument name "after" is reserved`},
		{stage.Description{Arguments: []stage.Argument{{Name: "a", Type: stage.Type{Kind: stage.Amount, Dimension: "lenght"}}}}, `did you mean "length"?`},
		{stage.Description{Arguments: []stage.Argument{{Name: "a", Type: stage.Type{Kind: stage.Amount, Dimension: "length", Unit: "Hz"}}}}, `"Hz" is no unit of length`},
		{stage.Description{Arguments: []stage.Argument{{Name: "a", Type: good, Default: "1"}}}, `the default does not fit, it is a text where a number is declared`},
		{stage.Description{Arguments: []stage.Argument{{Name: "a", Type: stage.Type{Kind: "colour"}}}}, `there is no type "colour"`},
		{stage.Description{Outputs: []stage.Output{{Name: "figures", Kind: "mesh"}}}, `the output name "figures" is reserved`},
		{stage.Description{Outputs: []stage.Output{{Name: "x", Kind: "novel"}}}, `there is no artifact kind "novel"`},
		{stage.Description{Figures: []stage.Figure{{Name: "x", Type: good}, {Name: "x", Type: good}}}, `the figure name "x" is no identifier or used twice`},
	} {
		folder := t.TempDir()
		write(t, folder, "job.hcl", "job \"x\" {}\nstage \"odd\" \"one\" {}\nstage \"odd\" \"two\" {}\n")
		asked := 0
		_, diags := job.Load(context.Background(), folder, job.Options{
			Describe: func(context.Context, string) (stage.Description, error) { asked++; return c.d, nil },
			Kinds:    func(k string) bool { return k != "novel" },
		})
		if len(diags) != 1 || !strings.Contains(diags[0].Detail, c.want) || asked != 1 {
			t.Errorf("asked %d times, got %v, want one that says %q", asked, diags, c.want)
		}
	}
}

func TestFolderJob(t *testing.T) {
	j, diags := job.Load(context.Background(), jobs+"/good/folder", job.Options{Describe: jobtest.Describe})
	if diags.HasErrors() {
		t.Fatal(diags)
	}
	if len(j.Sources) != 2 || j.Sources[0].File != "1-settings.hcl" || strings.Join(j.Passed, " ") != "airframe.hcl" || len(j.Stages) != 2 {
		t.Errorf("sources %d, passed %v, stages %d", len(j.Sources), j.Passed, len(j.Stages))
	}
}

func TestMissingJob(t *testing.T) {
	for path, want := range map[string]string{
		jobs + "/good/baselin.hcl": "did you mean " + "../../../testdata/jobs/good/baseline.hcl?",
		jobs + "/good/baseline":    "did you mean " + "../../../testdata/jobs/good/baseline.hcl?",
		jobs + "/good/zzzzzz":      "there is no file or folder",
	} {
		j, diags := job.Load(context.Background(), path, options())
		if j == nil || len(diags) != 1 || !strings.Contains(strings.ReplaceAll(diags[0].Detail, `\`, "/"), want) {
			t.Errorf("%s gives %v", path, diags)
		}
	}
}
