package report

import (
	"strings"
	"testing"

	"hushframe/core/pipeline/stage"
)

// A page of two runs shows every branch with charts and tables of its own, what else differs, and what could not be compared.
func TestChangesPage(t *testing.T) {
	x := &Changes{Title: "before and after", Closing: "3 modes followed", Branches: []Branch{{"light", planks(t)}, {"heavy <b>", planks(t)}},
		Tables: []stage.Section{{Title: "Settings that differ", Columns: []stage.Column{{Name: "setting"}, {Name: "after", Right: true}}, Rows: [][]string{{"<script>", "3 mm"}}}},
		Notes:  []string{"tail: the masses have nothing in common"}}
	d, err := ChangesPage(x, "change.html")
	if err != nil {
		t.Fatal(err)
	}
	page := string(d.Files["change.html"])
	for _, want := range []string{"No requirement that held before fails now", "3 modes followed.", `id="difference"`, `id="difference-2"`, "What the change did: light", "heavy &lt;b&gt;",
		`id="chart-change-roll"`, `id="chart-change-roll-2"`, "&lt;script&gt;", "tail: the masses have nothing in common"} {
		if !strings.Contains(page, want) {
			t.Errorf("%q is missing", want)
		}
	}
	for _, name := range []string{"modes-followed", "modes-followed-2", "settings-that-differ"} {
		if d.Files["change-tables/"+name+".csv"] == nil {
			t.Errorf("no table %s", name)
		}
	}
	if strings.Contains(page, "<script>,") || strings.Contains(page, "heavy <b>") {
		t.Error("a name is not escaped")
	}
	x.Worse = true
	if d, err = ChangesPage(x, "change.html"); err != nil || !strings.Contains(string(d.Files["change.html"]), "A requirement that held before does not now") {
		t.Errorf("worse is not said: %v", err)
	}
}
