# Question: which motions of the Sandpiper can be found in its first hover alone, and which
# modes of the model are they?
# Expected: eight modes between 100 and 400 Hz with frequency, damping and gyro direction, no
# rotor order among them, all paired with modes of the model, which lie 0 to 7 % higher;
# order 6 of the rotors, above half the sample rate, is found folded and taken out.

job "sandpiper-flight" {
  about = "Modes of revision A as flown, without known forces"
}

setting "mesh_size" {
  value = "5 mm"
  about = "target edge length away from free edges"
}

stage "import" "frame" {
  airframe = "airframe.hcl"
}

stage "mesh" "shells" {
  geometry = stage.frame.geometry
  size     = setting.mesh_size
}

stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

stage "sweep" "flight" {
  modes      = stage.modes.modes
  properties = stage.frame.properties
  from       = "80 Hz"
  to         = "500 Hz"
}

stage "record" "hover" {
  file    = "flights/hover-03.csv.gz"
  window  = ["14 s", "72 s"]
  columns = { time = "time_us", roll = "gx", pitch = "-gy", yaw = "-gz" }
  units   = { gx = "deg/s", gy = "deg/s", gz = "deg/s" }
  rotors  = { fl = "rpm_1", fr = "rpm_2", rl = "rpm_3", rr = "rpm_4" }
  orders  = [1, 2, 3, 6]
}

stage "identify" "inflight" {
  file    = "flights/hover-03.csv.gz"
  window  = ["14 s", "72 s"]
  columns = { time = "time_us", roll = "gx", pitch = "-gy", yaw = "-gz" }
  units   = { gx = "deg/s", gy = "deg/s", gz = "deg/s" }
  rotors  = { fl = "rpm_1", fr = "rpm_2", rl = "rpm_3", rr = "rpm_4" }
}

stage "compare" "check" {
  predicted  = stage.flight.response
  observed   = stage.hover.spectra
  modes      = stage.modes.modes
  identified = stage.inflight.identified
}

stage "report" "page" {
  include = [
    stage.frame.geometry, stage.frame.properties, stage.shells.mesh, stage.modes.modes,
    stage.flight.response, stage.hover.spectra, stage.inflight.identified, stage.check.comparison,
  ]
  to = "report/flight.html"
}
