job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }
stage "mesh" "shells" { geometry = stage.frame.geometry }
stage "solve" "modes" {
  mesh       = stage.shells.mesh
  properties = stage.frame.properties
  up_to      = "750 Hz"
}

stage "report" "page" {
  include = [stage.modes.modes]
  to      = "report/bad.html"
}
stage "mesh" "after" {
  geometry = stage.frame.geometry
  after    = [stage.page]
}
stage "report" "second" {
  include = [stage.modes.modes]
  after   = [stage.page]
  to      = "report/bad.html"
}
stage "report" "third" {
  include = [stage.modes.modes]
  to      = "report/../late.hcl"
}
