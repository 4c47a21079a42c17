plate "arm_fr" {
  thickness = "5 mm"
}
