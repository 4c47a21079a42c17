job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }

stage "mesh" "shells" {
  geometry     = stage.frame.geometry
  about        = 3
  after        = ["frame"]
  time_limit   = 30
  memory_limit = "2 GHz"
}
stage "mesh" "again" {
  geometry     = stage.frame.geometry
  about        = "mass ${stage.frame.figures.mass}"
  after        = stage.frame
  time_limit   = "0 s"
  memory_limit = "2 Gib"
}
stage "mesh" "third" {
  geometry = stage.frame.geometry
  after    = [stage.fram, stage.frame.geometry]
}
