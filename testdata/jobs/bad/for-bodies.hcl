job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }
stage "mesh" "shells" { geometry = stage.frame.geometry }
stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

requirement "member" { that = length([for m in stage.modes.figures.modes : m.freq]) > 0 }
requirement "inner" { that = length([for n in [1, 2] : [for m in stage.modes.figures.modes : m.frequency + n]]) > 0 }
requirement "condition" { that = length([for m in stage.modes.figures.modes : m.part if m.frequency > 20]) > 0 }
