job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hcl" }

setting "size" {
  value = "9 mm"
  max   = "8 mm"
}
setting "element" {
  value   = "cubic"
  choices = ["linear", "quadratic"]
}
setting "odd" {
  value = [1, 2]
  min   = 1
  choices = ["a"]
}
stage "mesh" "high" {
  geometry = stage.frame.geometry
  size     = "0.2 m"
  growth   = 5
  rows     = 2.5
  element  = "quadratic"
}
stage "mesh" "low" {
  geometry = stage.frame.geometry
  size     = "0 mm"
  growth   = 0.5
  rows     = 0
  element  = "cubic"
}
stage "record" "hover" {
  file   = "../good/flights/hover-03.csv"
  window = ["8 s", "-1 s"]
}
