job "sandpiper-baseline" {
  about = "Five-inch survey frame, revision A, checked against the first hover"
}

setting "arm_thickness" {
  value = "5 mm"
  about = "carbon plate the arms are cut from"
}

stage "import" "frame" {
  airframe = "airframe.hcl"
  with     = { arm_thickness = setting.arm_thickness }
}

stage "mesh" "shells" {
  geometry = stage.frame.geometry
  element  = "quadratic-triangle"
  size     = "3 mm"
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

stage "record" "hover" {
  file   = "flights/hover-03.csv"
  window = ["8 s", "60 s"]
}

stage "compare" "check" {
  predicted = stage.flight.response
  observed  = stage.hover.spectra
}

stage "report" "page" {
  include = [stage.modes.modes, stage.flight.response, stage.check.comparison]
  to      = "report/baseline.html"
}

requirement "pitch-modes-apart" {
  figure   = stage.modes.figures.smallest_gap_pitch
  at_least = "20 Hz"
  because  = "two modes strong on one axis and closer than this add up at the gyro"
}
