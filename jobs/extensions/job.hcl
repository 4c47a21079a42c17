# Question: is the plate theory of the built-in elements right on the Sandpiper's own plates? An arm and a
# clamp plate, free in space, are solved with shells and with solid wedges from outside, which know no plate theory.
# Expected: the five lowest modes of each agree within half a percent. Besides, a reader from outside reads
# bench.pebble, and a stage from outside exports mode shapes for general viewers.
#
# The three extensions are built from plugins/ and pinned first; see README.md beside this file.

job "extensions" {
  about = "Shell against solid on an arm and a clamp plate, with a reader and a stage from outside"
}

setting "size" {
  value = "3 mm"
  about = "wanted length of triangle sides"
}

setting "layers" {
  value = 2
  about = "wedges through the thickness"
}

stage "import" "arm" {
  airframe = "arm.hcl"
}

stage "mesh" "arm_shell_mesh" {
  geometry = stage.arm.geometry
  size     = setting.size
}

stage "solve" "arm_shell" {
  mesh       = stage.arm_shell_mesh.mesh
  properties = stage.arm.properties
  up_to      = "9 kHz"
  swept_to   = "6 kHz"
}

stage "mesh" "arm_solid_mesh" {
  geometry = stage.arm.geometry
  size     = setting.size
  element  = "solid-wedge"
  options  = { layers = setting.layers }
}

stage "solve" "arm_solid" {
  mesh       = stage.arm_solid_mesh.mesh
  properties = stage.arm.properties
  up_to      = "9 kHz"
  swept_to   = "6 kHz"
}

stage "import" "clamp" {
  airframe = "clamp.hcl"
}

stage "mesh" "clamp_shell_mesh" {
  geometry = stage.clamp.geometry
  size     = setting.size
}

stage "solve" "clamp_shell" {
  mesh       = stage.clamp_shell_mesh.mesh
  properties = stage.clamp.properties
  up_to      = "4 kHz"
  swept_to   = "2.6 kHz"
}

stage "mesh" "clamp_solid_mesh" {
  geometry = stage.clamp.geometry
  size     = setting.size
  element  = "solid-wedge"
  options  = { layers = setting.layers }
}

stage "solve" "clamp_solid" {
  mesh       = stage.clamp_solid_mesh.mesh
  properties = stage.clamp.properties
  up_to      = "4 kHz"
  swept_to   = "2.6 kHz"
}

stage "vtk-modes" "shapes" {
  mesh  = stage.arm_solid_mesh.mesh
  modes = stage.arm_solid.modes
  to    = "shapes/arm.vtu"
}

stage "record" "bench" {
  file    = "bench.pebble"
  reader  = "pebble"
  columns = { roll = "gx", pitch = "gy", yaw = "gz" }
}

requirement "arm-agrees" {
  that    = abs(number_in(stage.arm_solid.figures.lowest, "Hz") / number_in(stage.arm_shell.figures.lowest, "Hz") - 1) < 0.005
  because = "a solid knows no plate theory"
}

requirement "clamp-agrees" {
  that    = abs(number_in(stage.clamp_solid.figures.lowest, "Hz") / number_in(stage.clamp_shell.figures.lowest, "Hz") - 1) < 0.005
  because = "a solid knows no plate theory"
}
