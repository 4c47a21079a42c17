job "bad" {}

stage "import" "frame" {}
stage "mesh" "shells" {}
stage "solve" "modes" { mesh = null }
setting "x" {}
requirement "r" { because = "it has to" }
