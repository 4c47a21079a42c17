job "b" {}
setting "x" { value = setting.y }
