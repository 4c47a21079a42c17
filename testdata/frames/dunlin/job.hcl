# Question: does a frame of another layout run without a change to the code?

job "dunlin" {
  about = "One-piece frame with six rotors, no recording yet"
}

stage "import" "frame" {
  airframe = "airframe.hcl"
}

stage "mesh" "shells" {
  geometry = stage.frame.geometry
  size     = "8 mm"
}

stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "500 Hz"
}

stage "sweep" "flight" {
  modes      = stage.modes.modes
  properties = stage.frame.properties
  from       = "40 Hz"
  to         = "330 Hz"
}

stage "report" "page" {
  include = [stage.frame.geometry, stage.frame.properties, stage.shells.mesh, stage.modes.modes, stage.flight.response]
  to      = "report/dunlin.html"
}
