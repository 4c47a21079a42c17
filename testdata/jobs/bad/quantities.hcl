job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }
stage "mesh" "shells" { geometry = stage.frame.geometry }
stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

setting "thickness" { value = "5 Hz" }
stage "mesh" "bare" {
  geometry = stage.frame.geometry
  size     = 3
}
stage "mesh" "dimension" {
  geometry = stage.frame.geometry
  size     = setting.thickness
}
stage "mesh" "unit" {
  geometry = stage.frame.geometry
  size     = "3 mms"
}
stage "mesh" "none" {
  geometry = stage.frame.geometry
  size     = "3"
}
stage "mesh" "comma" {
  geometry = stage.frame.geometry
  size     = "2,5 mm"
}
stage "mesh" "word" {
  geometry = stage.frame.geometry
  size     = "small"
  growth   = "1.2"
  rows     = "3 mm"
}
stage "solve" "cycles" {
  mesh        = stage.shells.mesh
  properties  = stage.frame.properties
  up_to       = "45000 rpm"
  hover_speed = "270 Hz"
}
stage "mesh" "figure" {
  geometry = stage.frame.geometry
  size     = stage.modes.figures.lowest
  growth   = stage.frame.figures.mass
}
stage "mesh" "number" {
  geometry = stage.frame.geometry
  size     = stage.frame.figures.plates
}
stage "mesh" "made" {
  geometry = stage.frame.geometry
  size     = quantity(3, "Hz")
}
