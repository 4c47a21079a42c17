# The clamp plate of the Sandpiper, free in space: nothing but its carbon and a gyro of next to no mass, which every
# airframe has.

airframe "sandpiper-clamp" {
  about = "a clamp plate alone"
}

input "thickness" {
  value = "2 mm"
  about = "of the carbon plate"
}

plate "clamp" {
  outline   = "../sandpiper/cut/clamp.dxf"
  layer     = "cut"
  thickness = input.thickness
  material  = "carbon-0-90"
}

gyro "chip" {
  on   = plate.clamp
  at   = ["24 mm", "0 mm"]
  mass = "0.1 g"
  size = ["3 mm", "3 mm", "1 mm"]
}
