job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }
stage "mesh" "shells" { geometry = stage.frame.geometry }
stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

requirement "two-bounds" {
  figure   = stage.modes.figures.lowest
  at_least = "20 Hz"
  at_most  = "90 Hz"
}
requirement "both" {
  figure = stage.modes.figures.lowest
  that   = true
}
requirement "no-bound" { figure = stage.modes.figures.lowest }
requirement "dimension" {
  figure   = stage.modes.figures.lowest
  at_least = "20 mm"
}
requirement "bare" {
  figure   = stage.modes.figures.lowest
  at_least = 20
}
requirement "empty" {
  figure = stage.modes.figures.lowest
  within = ["90 Hz", "20 Hz"]
}
requirement "three" {
  figure = stage.modes.figures.count
  within = [1, 2, 3]
}
requirement "text" {
  figure   = stage.modes.figures.strongest_part
  at_least = "arm"
}
requirement "list" {
  figure   = stage.modes.figures.modes
  at_least = 1
}
requirement "artifact" {
  figure   = stage.modes.modes
  at_least = 1
}
requirement "no-condition" { that = stage.modes.figures.count }
requirement "unit" {
  figure   = stage.modes.figures.count
  at_least = "8 Hz"
}
requirement "late" {
  that = stage.page.figures.pages > 1
}
requirement "word" {
  figure  = stage.modes.figures.count
  atleast = 8
}
stage "report" "page" {
  include = [stage.modes.modes]
  to      = "report/bad.html"
}
