job "bad" {}

setings "x" { value = 1 }
setting "y" {
  valu  = 1
  unit { }
}
setting = { z = 1 }
size = "3 mm"
stage "mesh" {}
requirement "" {}
job "second" {}
