job "bad" {}

setting "a" {
  value = "5 mm
}
stage "mesh" "b" {
