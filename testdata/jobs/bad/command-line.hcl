job "bad" {}

# set thickness=6
# set arm=3
# set count=many
# set exact=yes
# set list=3
# set size=9mm
# set element=cubic
setting "thickness" { value = "5 mm" }
setting "count" { value = 3 }
setting "exact" { value = true }
setting "list" { value = [1, 2] }
setting "size" {
  value = "3 mm"
  max   = "8 mm"
}
setting "element" {
  value   = "linear"
  choices = ["linear", "quadratic"]
}

# What uses a wrong setting is not another mistake.
stage "import" "frame" {
  airframe = "../good/airframe.hcl"
  with     = { thickness = setting.thickness }
}
