# Question: how far does the mesh put the frequencies of the demo frame off, and what is lost by answering with modes?
# Expected: every mode below 750 Hz within 1 %, most within a tenth of that; the response within a thousandth of the
# direct solve of every unknown.

job "mesh-error" {
  about = "The demo frame on its usual mesh and with every element cut in four"
}

setting "mesh_size" {
  value = "5 mm"
  about = "target edge length of the mesh that is judged"
}

stage "import" "frame" {
  airframe = "../sandpiper/airframe.hcl"
}

stage "mesh" "usual" {
  geometry = stage.frame.geometry
  size     = setting.mesh_size
}

stage "solve" "modes" {
  mesh           = stage.usual.mesh
  properties     = stage.frame.properties
  up_to          = "750 Hz"
  estimate_error = true
}

stage "sweep" "response" {
  modes      = stage.modes.modes
  properties = stage.frame.properties
  mesh       = stage.usual.mesh
  from       = "80 Hz"
  to         = "500 Hz"
  check_at   = ["121 Hz", "205 Hz", "290 Hz", "480 Hz"]
}

requirement "modes-are-enough" {
  figure  = stage.response.figures.direct_error
  at_most = 0.001
  because = "residual vectors have to stand in for the modes left out"
}

requirement "mesh-fine-enough" {
  figure  = stage.modes.figures.largest_error
  at_most = 0.01
  because = "an error of the mesh must be small beside that of moduli and joints"
}

stage "report" "page" {
  include = [stage.usual.mesh, stage.modes.modes, stage.response.response]
  to      = "report/mesh.html"
}
