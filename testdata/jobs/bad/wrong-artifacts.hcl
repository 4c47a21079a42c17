job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }
stage "mesh" "shells" { geometry = stage.frame.geometry }
stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

stage "mesh" "properties" { geometry = stage.frame.properties }
stage "mesh" "text" { geometry = "frame.geometry" }
stage "mesh" "list" { geometry = [stage.frame.geometry] }
stage "mesh" "figure" { geometry = stage.frame.figures.mass }
stage "sweep" "flight" {
  modes      = stage.shells.mesh
  properties = stage.frame.properties
  from       = stage.frame.geometry
  to         = "500 Hz"
}
stage "report" "page" {
  include = [stage.modes.modes, stage.shells.mesh]
  to      = "report/bad.html"
}
stage "report" "one" {
  include = stage.modes.modes
  to      = "report/one.html"
}
stage "compare" "check" {
  predicted = stage.flight.response
  observed  = stage.modes.modes
}
stage "import" "with" {
  airframe = "../good/airframe.hcl"
  with     = { x = stage.frame.geometry }
}
