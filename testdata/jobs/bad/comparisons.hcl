job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }
stage "mesh" "shells" { geometry = stage.frame.geometry }
stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

requirement "dimension" { that = stage.modes.figures.lowest > "20 mm" }
requirement "number" { that = stage.modes.figures.lowest > 20 }
requirement "equal" { that = stage.modes.figures.lowest == 20 }
requirement "two" { that = stage.modes.figures.lowest < stage.frame.figures.mass }
requirement "texts" { that = "20 Hz" < "2 mm" }
requirement "order" { that = stage.modes.figures.strongest_part < "arm" }
