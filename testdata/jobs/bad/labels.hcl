job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }
stage "import" "frame" { airframe = "../good/airframe.hcl" }
stage "import" "2nd frame" { airframe = "../good/airframe.hcl" }
setting "size" { value = "3 mm" }
setting "size" { value = "4 mm" }
setting "si ze" { value = "4 mm" }
requirement "light" {
  figure  = stage.frame.figures.mass
  at_most = "1 kg"
}
requirement "light" {
  figure  = stage.frame.figures.mass
  at_most = "1 kg"
}
