# Question: does a mass limit that revision A cannot meet fail the job?
# Expected: it does, with exit code 3, and the report is written all the same.

job "sandpiper-limit" {
  about = "Revision A against a limit that it breaks on purpose"
}

stage "import" "frame" {
  airframe = "airframe.hcl"
}

stage "mesh" "shells" {
  geometry = stage.frame.geometry
  element  = "quadratic-triangle"
  size     = "14 mm"
}

stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "300 Hz"
  swept_to   = "200 Hz"
}

stage "report" "page" {
  include = [stage.frame.geometry, stage.frame.properties, stage.shells.mesh, stage.modes.modes]
  to      = "report/limit.html"
}

requirement "light-enough" {
  figure  = stage.frame.figures.total_mass
  at_most = "250 g"
  because = "a class limit that this frame does not meet; it is here to show what a broken requirement looks like"
}
