package importgeom

import (
	"fmt"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strings"

	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
	"hushframe/stages/importgeom/assemble"
	"hushframe/stages/importgeom/dxf"
	"hushframe/stages/importgeom/loops"
)

// Scaffold writes a minimal airframe.hcl and job.hcl into a folder of cut files: one plate for each file, on the layer
// with the largest outline, with the thickness guessed from the file's name. It returns the names of the files written
// and what is left to do, as sentences. It does not write over files that are there.
func Scaffold(folder string) (written, remarks []string, err error) {
	for _, name := range []string{"airframe.hcl", "job.hcl"} {
		if _, err := os.Lstat(filepath.Join(folder, name)); err == nil {
			return nil, nil, fault.New(fault.Input, "it is there already").In("start a frame", filepath.Join(folder, name)).
				Do("move it away, or start in another folder")
		}
	}
	plates, remarks, err := guessPlates(folder)
	if err != nil {
		return nil, nil, err
	}
	title := strings.Trim(identifier(filepath.Base(absolute(folder))), "_-")
	if title == "" {
		title = "frame"
	}
	for _, f := range []struct{ name, text string }{
		{"airframe.hcl", airframeText(title, plates)},
		{"job.hcl", jobText(title)},
	} {
		if err := os.WriteFile(filepath.Join(folder, f.name), []byte(f.text), 0o644); err != nil {
			return written, remarks, fault.New(fault.Input, "%v", err).In("start a frame", filepath.Join(folder, f.name)).Do("choose a folder that can be written to")
		}
		written = append(written, f.name)
	}
	if len(plates) > 1 {
		remarks = append(remarks, "put the plates in place (at is the LOWER face): bolts are found where holes line up and faces touch, standoffs are declared")
	}
	remarks = append(remarks, "take the # off the rotors and give their figures, and put the gyro where it is")
	return written, remarks, nil
}

func absolute(folder string) string {
	if a, err := filepath.Abs(folder); err == nil {
		return a
	}
	return folder
}

// guessed is a plate as far as its cut file tells.
type guessed struct {
	name, file     string
	layer, unit    string
	thickness      string
	fromName       bool
	pick           *outline.Point
	several        int
	region         outline.Region
	inside         outline.Point
	motors         []outline.Point
	lower          float64 // mm
	thicknessValue float64 // mm
}

func guessPlates(folder string) (plates []guessed, remarks []string, err error) {
	entries, err := os.ReadDir(folder)
	if err != nil {
		f := fault.From(err).In("start a frame", folder)
		f.Text, f.Kind = "the folder cannot be read", fault.Missing
		return nil, nil, f.Do("name a folder that holds cut files")
	}
	taken := map[string]bool{}
	level := 0.0
	found := 0
	for _, e := range entries {
		if e.IsDir() || !strings.EqualFold(filepath.Ext(e.Name()), ".dxf") {
			continue
		}
		found++
		data, err := os.ReadFile(filepath.Join(folder, e.Name()))
		if err != nil {
			return nil, nil, fault.New(fault.Input, "%v", err).In("read cut file", e.Name()).Do("make it readable")
		}
		p, why := guessPlate(e.Name(), data)
		if why != nil {
			remarks = append(remarks, fmt.Sprintf("%s is left out: %s", e.Name(), why.Text))
			continue
		}
		for base, n := p.name, 2; taken[p.name]; n++ {
			p.name = fmt.Sprintf("%s_%d", base, n)
		}
		taken[p.name] = true
		p.lower = level
		level += p.thicknessValue + 20
		plates = append(plates, *p)
	}
	switch {
	case found == 0:
		return nil, nil, fault.New(fault.Missing, "the folder holds no cut files").In("start a frame", folder).Do("put the DXF files of the plates there")
	case len(plates) == 0:
		return nil, nil, fault.New(fault.Input, "no cut file has a closed outline: %s", strings.Join(remarks, "; ")).In("start a frame", folder).
			Do("export the outlines as closed curves")
	}
	return plates, remarks, nil
}

// guessPlate takes the layer with the largest closed outline.
func guessPlate(file string, data []byte) (*guessed, *fault.Error) {
	p := &guessed{name: identifier(strings.TrimSuffix(file, filepath.Ext(file))), file: file}
	if _, err := dxf.Read(file, data, dxf.Options{}); err != nil {
		if _, err := dxf.Read(file, data, dxf.Options{Unit: "mm"}); err != nil {
			return nil, fault.From(err)
		}
		p.unit = "mm"
	}
	d, all, err := assemble.Outlines(file, data, dxf.Options{Unit: p.unit}, assemble.DefaultTolerance)
	if err != nil {
		return nil, fault.From(err)
	}
	best := largestOutline(all)
	if len(d.Layers) > 1 {
		// One layer alone is better than all of them, unless it misses the outline.
		var alone loops.Result
		area := 0.0
		for _, l := range d.Layers {
			_, r, err := assemble.Outlines(file, data, dxf.Options{Unit: p.unit, Layers: []string{l.Name}}, assemble.DefaultTolerance)
			if err != nil || len(r.Outlines) == 0 {
				continue
			}
			if a := largestOutline(r).Region.Outer.Area(); a > area*(1+1e-9) {
				area, alone, p.layer = a, r, l.Name
			}
		}
		if p.layer != "" && (best == nil || len(all.Tangles) > 0 || area > 0.99*best.Region.Outer.Area()) {
			all, best = alone, largestOutline(alone)
		} else {
			p.layer = ""
		}
	}
	switch {
	case len(all.Tangles) > 0:
		return nil, fault.New(fault.Input, "its outline crosses or touches itself")
	case best == nil:
		return nil, fault.New(fault.Input, "it has no closed outline")
	}
	if f := assemble.OpenOutline(all, assemble.DefaultTolerance); f != nil {
		return nil, f
	}
	for _, o := range all.Outlines {
		if o.Depth == 0 {
			p.several++
		}
	}
	p.region = best.Region
	p.inside = assemble.Inside(p.region)
	if p.several > 1 {
		p.pick = &p.inside
	}
	p.motors = assemble.MotorPlaces(p.region)
	p.thickness, p.thicknessValue, p.fromName = thicknessOf(file)
	return p, nil
}

func largestOutline(r loops.Result) *loops.Outline {
	if len(r.Outlines) == 0 {
		return nil
	}
	return &r.Outlines[0]
}

var (
	thicknessMark = regexp.MustCompile(`(?i)(\d+(?:[.,p]\d+)?)[ _-]?mm`)
	notInName     = regexp.MustCompile(`[^a-z0-9_-]+`)
)

// thicknessOf finds a thickness in a file name, such as arm_4mm.dxf or top-2.5mm.dxf; 2 mm when there is none.
func thicknessOf(file string) (text string, mm float64, found bool) {
	if m := thicknessMark.FindStringSubmatch(file); m != nil {
		s := strings.NewReplacer(",", ".", "p", ".", "P", ".").Replace(m[1])
		if _, err := fmt.Sscanf(s, "%g", &mm); err == nil && mm > 0.1 && mm <= 20 {
			return fmt.Sprintf("%g mm", mm), mm, true
		}
	}
	return "2 mm", 2, false
}

// identifier makes a name that can follow "plate." of a file name, without its thickness.
func identifier(s string) string {
	s = strings.ToLower(thicknessMark.ReplaceAllString(s, ""))
	s = strings.Trim(notInName.ReplaceAllString(s, "_"), "_-")
	if s == "" || s[0] >= '0' && s[0] <= '9' {
		s = strings.TrimSuffix("plate_"+s, "_")
	}
	return s
}

func point(p outline.Point) string {
	round := func(x float64) string {
		return fmt.Sprintf("%g mm", math.Round(x*1e5)/100+0)
	}
	return fmt.Sprintf("[%q, %q]", round(p.X), round(p.Y))
}
