job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }
stage "mesh" "shells" { geometry = stage.frame.geometry }
stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

setting "arm_thickness" { value = "5 mm" }

stage "meshh" "other" {}

stage "import" "names" {
  airframe = "../good/airframe.hcl"
  with = {
    a = setting.arm_thicknes
    b = setings.arm_thickness
    c = arm_thickness
    d = stage.modez.figures.lowest
    e = stage.modes.figures.lowst
    f = stage.modes.figures.modes[0].freqency
    g = carbon
    h = stage.modes.lowest
    i = stage.modes.figures.modes.frequency
    j = flor(2.5)
    k = job.folder
  }
}

stage "mesh" "outputs" {
  geometry = stage.frame.geometri
  sise     = "3 mm"
}

stage "mesh" "figure" {
  geometry = stage.frame.figures.geometry
}

stage "mesh" "whole" {
  geometry = stage.frame
}
