job "in-pieces" {}

setting "size" { value = "3 mm" }
