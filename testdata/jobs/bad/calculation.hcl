job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }
stage "mesh" "shells" { geometry = stage.frame.geometry }
stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

setting "thickness" { value = "5 mm" }
setting "twice" { value = 2 * "5 mm" }
stage "mesh" "setting" {
  geometry = stage.frame.geometry
  size     = setting.thickness * 2
}
stage "mesh" "text" {
  geometry = stage.frame.geometry
  size     = "3 mm" + "1 mm"
}
stage "sweep" "figure" {
  modes      = stage.modes.modes
  properties = stage.frame.properties
  from       = stage.modes.figures.lowest - 10
  to         = -stage.modes.figures.lowest
  shapes_at  = [for m in stage.modes.figures.modes : m.frequency * 2]
}
stage "mesh" "functions" {
  geometry = stage.frame.geometry
  growth   = max(setting.thickness, 2)
  rows     = sum(["1 mm", "2 mm"])
  size     = quantity("3 mm", "mm")
}
stage "mesh" "arguments" {
  geometry = stage.frame.geometry
  growth   = number_in(setting.thickness, "Hz")
  rows     = number_in(3, "mm")
  size     = quantity(3, "mmm")
}
stage "mesh" "other" {
  geometry = stage.frame.geometry
  growth   = 1 + "wide"
  rows     = 1 / 0
  size     = quantity(number_in(stage.modes.figures.lowest, "mm"), "mm")
}
