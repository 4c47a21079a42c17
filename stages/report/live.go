package report

import (
	"crypto/sha256"
	"encoding/base64"
	"html/template"

	"hushframe/stages/report/front"
	"hushframe/stages/report/scene"
)

// live is the moving part of a page: what the front end shows, and the front end.
type live struct {
	Data   template.HTML
	Script template.HTML
	Policy string // the one source of script that the page allows
}

// newLive packs the scene. Its text holds no character that could end the element it stands in.
func newLive(x *scene.Scene) (*live, error) {
	data, err := x.JSON()
	if err != nil {
		return nil, err
	}
	sum := sha256.Sum256([]byte(front.Script))
	return &live{
		Data:   template.HTML(`<script type="application/json" id="scene-data">` + string(data) + `</script>`),
		Script: template.HTML("<script>" + front.Script + "</script>"),
		Policy: "'sha256-" + base64.StdEncoding.EncodeToString(sum[:]) + "'",
	}, nil
}

// scene hands the artifacts to the scene.
func (c *content) scene() *scene.Scene {
	about := map[int]string{}
	if c.modes != nil {
		for _, m := range c.modes.Survey.Modes {
			about[m.Number] = modeCaption(c.modes, m)
		}
	}
	x := scene.New(scene.Sources{Properties: c.properties, Mesh: c.mesh, Modes: c.modes, Response: c.response},
		func(number int) string { return about[number] })
	x.Charts = c.charts
	return x
}
