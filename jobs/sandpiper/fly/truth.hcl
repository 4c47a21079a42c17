# Question: what are the modes of the Sandpiper as it was really built?
# The flight simulation reads them from here; nobody with a real frame has this file.

job "sandpiper-truth" {
  about = "Hidden truth behind the recorded flight"
}

stage "import" "frame" {
  airframe = "airframe-truth.hcl"
}

stage "mesh" "shells" {
  geometry = stage.frame.geometry
  element  = "quadratic-triangle"
  size     = "3 mm"
}

stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "1200 Hz"
}
