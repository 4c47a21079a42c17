# Question: where does the Sandpiper, revision A, ring, before anything is flown?
# Expected: 29 modes below 750 Hz, the first 61 Hz, none missed; in a few seconds, to try a change quickly:
# --set arm_thickness=6mm.

job "sandpiper-modes" {
  about = "Modes of revision A alone"
}

setting "arm_thickness" {
  value = "5 mm"
  about = "carbon plate the arms are cut from"
}

setting "carbon_modulus" {
  value = "55 GPa"
  about = "in-plane modulus of the carbon plate"
}

setting "battery_mass" {
  value = "190 g"
  about = "battery with its lead"
}

setting "carbon_loss_factor" {
  value = 0.010
  about = "hysteretic loss factor of the carbon plate"
}

setting "mesh_size" {
  value = "5 mm"
  about = "target edge length away from free edges"
}

stage "import" "frame" {
  airframe = "airframe.hcl"
  with = {
    arm_thickness      = setting.arm_thickness
    carbon_modulus     = setting.carbon_modulus
    carbon_loss_factor = setting.carbon_loss_factor
    battery_mass       = setting.battery_mass
  }
}

stage "mesh" "shells" {
  geometry = stage.frame.geometry
  element  = "quadratic-triangle"
  size     = setting.mesh_size
}

stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

requirement "none-missed" {
  that    = stage.modes.figures.rigid_ratio < 1e-3 && stage.modes.figures.modes_below >= stage.modes.figures.modes_wanted
  because = "a response rests on every mode up to 1.5 times the highest swept frequency"
}
