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

  # Speeds are not measured on this frame. What it hovers and climbs at is known as throttle, and from the bench how fast that turns a rotor.
  throttle_flown    = [{ throttle = 0.40, share = 0.8 }, { throttle = 0.55, share = 0.2 }]
  speed_at_throttle = [{ throttle = 0.15, speed = "3800 rpm" }, { throttle = 0.45, speed = "8300 rpm" }, { throttle = 1, speed = "14000 rpm" }]
}

stage "report" "page" {
  include = [stage.frame.geometry, stage.frame.properties, stage.shells.mesh, stage.modes.modes, stage.flight.response]
  to      = "report/dunlin.html"
}
