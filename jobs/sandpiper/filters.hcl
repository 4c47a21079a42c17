# Question: which filters does the Sandpiper's control need between gyro and loop, and what do they cost?
# Expected: notches that follow the rotors' first order take most of what is worth taking; with one low-pass they leave
# less than 3 deg/s on every axis at less lag than the usual chain of low-passes, which buys it with phase.

job "sandpiper-filters" {
  about = "What gyro filters buy and cost on revision A"
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

# The chain that is flown today.
stage "filter" "usual" {
  observed   = stage.hover.spectra
  predicted  = stage.flight.response
  identified = stage.inflight.identified
  filters = [
    { type = "first-order", at = "110 Hz", count = 2 },
    { type = "low-pass", at = "150 Hz" },
  ]
  residual = "3 deg/s"
}

# What would do.
stage "filter" "chosen" {
  observed   = stage.hover.spectra
  predicted  = stage.flight.response
  identified = stage.inflight.identified
  residual   = "3 deg/s"
}

stage "report" "page" {
  include = [
    stage.frame.geometry, stage.shells.mesh, stage.modes.modes, stage.flight.response,
    stage.hover.spectra, stage.inflight.identified, stage.chosen.filtered,
  ]
  to = "report/filters.html"
}

requirement "less-lag-than-today" {
  that    = stage.chosen.figures.met && stage.chosen.figures.lag < stage.usual.figures.lag
  because = "what the filters cost in phase the control loses in bandwidth"
}
