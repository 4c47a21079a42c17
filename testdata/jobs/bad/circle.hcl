job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }

stage "mesh" "shells" {
  geometry = stage.frame.geometry
  size     = quantity(1000 / number_in(stage.flight.figures.peak_pitch, "Hz"), "mm")
}
stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}
stage "sweep" "flight" {
  modes      = stage.modes.modes
  properties = stage.frame.properties
  from       = "100 Hz"
  to         = "500 Hz"
}
stage "mesh" "itself" {
  geometry = stage.frame.geometry
  rows     = stage.itself.figures.unknowns
}
