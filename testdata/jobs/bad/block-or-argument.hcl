job "bad" {}

stage "import" "frame" {
  airframe = "../good/airframe.hcl"
  with { arm_thickness = "5 mm" }
  bolts {}
}
setting "y" {
  value { x = 1 }
}
