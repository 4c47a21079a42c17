# Figures of one stage steer another, and stages stand before those they need.
job "expressions" {}

setting "arm_thickness" {
  value = "5 mm"
  min   = "1 mm"
  max   = "12 mm"
}

setting "element" {
  value   = "quadratic-triangle"
  choices = ["linear-triangle", "quadratic-triangle"]
}

setting "flights" {
  value = [3]
}

stage "report" "page" {
  include = concat([stage.flight.response], [stage.modes.modes])
  title   = "${job.name}: ${stage.modes.figures.count} modes from ${stage.modes.figures.lowest}"
  to      = path("report", "${job.name}.html")
}

stage "sweep" "flight" {
  modes      = stage.modes.modes
  properties = stage.frame.properties
  from       = max(number_in(stage.modes.figures.lowest, "Hz"), 50) > 80 ? "80 Hz" : "50 Hz"
  to         = quantity(number_in(stage.modes.figures.lowest, "Hz") * 4, "Hz")
  shapes_at  = [for m in stage.modes.figures.modes : m.frequency if m.gyro_pitch > 0.1 && m.frequency > "60 Hz"]
  source     = { rotors = [for r in ["fr", "fl"] : upper(r)] }
}

stage "record" "hover" {
  file       = path("flights", format("hover-%02d.csv", setting.flights[0]))
  after      = [stage.flight]
  time_limit = "10 min"
  channels   = { pitch = "-gy" }
}

stage "import" "frame" {
  airframe = "airframe.hcl"
  with     = setting
}

stage "mesh" "shells" {
  about        = "elements an eighth of the arm thickness at least"
  geometry     = stage.frame.geometry
  element      = setting.element
  size         = quantity(max(number_in(setting.arm_thickness, "mm") / 8, 0.5), "mm")
  memory_limit = "1 GiB"
}

stage "solve" "modes" {
  mesh        = stage.shells.mesh
  properties  = stage.frame.properties
  up_to       = "750 Hz"
  hover_speed = "16000 rpm"
}

requirement "light" {
  figure  = stage.frame.figures.mass
  at_most = "400 g"
}

requirement "off-hover" {
  that    = all([for m in stage.modes.figures.modes : abs(number_in(m.frequency, "Hz") - 16000 / 60) > 5])
  because = "once per turn"
}

requirement "lowest" {
  figure = stage.modes.figures.lowest
  within = ["60 Hz", "200 Hz"]
}
