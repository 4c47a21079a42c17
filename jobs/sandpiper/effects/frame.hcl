# Question: what mesh and properties do the variants of the nominal frame start from?
# Expected: those of baseline.hcl; effects takes one thing after another away from them.

job "sandpiper-effects" {
  about = "The frame whose joints, mounts and rotors are taken away one by one"
}

setting "mesh_size" {
  value = "5 mm"
  about = "target edge length away from free edges"
}

stage "import" "frame" {
  airframe = "../airframe.hcl"
}

stage "mesh" "shells" {
  geometry = stage.frame.geometry
  element  = "quadratic-triangle"
  size     = setting.mesh_size
}
