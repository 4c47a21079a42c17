job "bad" {}

stage "import" "frame" { airframe = "../good/airframe.hlc" }
stage "record" "hover" { file = "flights/hover-03.csv" }
stage "report" "page" {
  include = []
  to      = "report"
}
stage "record" "own" { file = "report/spectra.csv" }
