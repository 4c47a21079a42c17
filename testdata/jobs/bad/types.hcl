job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }
stage "mesh" "shells" { geometry = stage.frame.geometry }
stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

stage "record" "hover" {
  file     = 3
  window   = "8 s"
  strict   = "true"
  channels = ["gx"]
}
stage "record" "again" {
  file     = ""
  window   = ["8 s", 60]
  strict   = 1
  channels = { pitch = 1 }
}
stage "sweep" "flight" {
  modes      = stage.modes.modes
  properties = stage.frame.properties
  from       = ["100 Hz"]
  to         = true
  source = {
    force  = "1e-4 N"
    moments = "1e-8 (N*m)2/Hz"
  }
}
stage "sweep" "list" {
  modes      = stage.modes.modes
  properties = stage.frame.properties
  from       = "100 Hz"
  to         = "500 Hz"
  shapes_at  = stage.modes.figures.modes
  source     = "white"
}
