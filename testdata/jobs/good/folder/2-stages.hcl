stage "import" "frame" { airframe = "frame/airframe.hcl" }

stage "mesh" "shells" {
  geometry = stage.frame.geometry
  size     = setting.size
}
