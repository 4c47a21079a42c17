# Question: what do arms of 6 mm in place of 5 mm do to the Sandpiper, and do they pay for their mass?
# Expected: the modes of the arms rise by 6 to 19 %, the frame gains 12 g, and the level at the gyro changes by less than
# 3 dB in all: the peaks move up rather than going away.

job "sandpiper-arms" {
  about = "Five-inch survey frame with thicker arms, beside the frame as it is"
}

setting "arm_thickness" {
  value = "6 mm"
  about = "carbon plate that the arms would be cut from"
}

setting "mesh_size" {
  value = "8 mm"
  about = "target edge length away from free edges; coarse, since only changes count"
}

stage "import" "before" {
  airframe = "airframe.hcl"
}

stage "mesh" "before_mesh" {
  geometry = stage.before.geometry
  size     = setting.mesh_size
}

stage "solve" "before_modes" {
  mesh       = stage.before_mesh.mesh
  properties = stage.before.properties
  up_to      = "750 Hz"
}

stage "sweep" "before_flight" {
  modes      = stage.before_modes.modes
  properties = stage.before.properties
  from       = "80 Hz"
  to         = "500 Hz"
}

stage "import" "after" {
  airframe = "airframe.hcl"
  with     = { arm_thickness = setting.arm_thickness }
}

stage "mesh" "after_mesh" {
  geometry = stage.after.geometry
  size     = setting.mesh_size
}

stage "solve" "after_modes" {
  mesh       = stage.after_mesh.mesh
  properties = stage.after.properties
  up_to      = "750 Hz"
}

stage "sweep" "after_flight" {
  modes      = stage.after_modes.modes
  properties = stage.after.properties
  from       = "80 Hz"
  to         = "500 Hz"
}

stage "contrast" "thicker" {
  reference = [stage.before.properties, stage.before_mesh.mesh, stage.before_modes.modes, stage.before_flight.response]
  changed   = [stage.after.properties, stage.after_mesh.mesh, stage.after_modes.modes, stage.after_flight.response]
}

stage "report" "page" {
  include = [stage.thicker.difference]
  to      = "report/arms.html"
  charts  = ["svg"]
}

requirement "no-more-mass-than-it-is-worth" {
  figure  = stage.thicker.figures.mass_change
  at_most = "15 g"
  because = "the class this frame is built for leaves 16 g"
}

requirement "nothing-unheard-of" {
  figure   = stage.thicker.figures.tracked
  at_least = 15
  because  = "with fewer modes followed the two frames are too unlike to be compared mode by mode"
}
