plate "base" {
  outline   = "../frame/cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "carbon-0-90"
}

joint "sandwich" {
  x  = "1e8 kN/mm"
  rz = "1e10 N*m/rad"
}

pressed "faces" {
  plates = [plate.base, plate.lid]
  normal = "1e7 N/mm3"
}

plate "lid" {
  outline   = "../frame/cut/base.dxf"
  layer     = "cut"
  thickness = "2 mm"
  material  = "carbon-0-90"
  at        = ["0 mm", "0 mm", "2 mm"]
}

lump "battery" {
  on   = plate.lid
  at   = ["0 mm", "0 mm"]
  mass = "100 g"
  size = ["40 mm", "20 mm", "10 mm"]
  mount {
    places    = [["10 mm", "5 mm"], ["-10 mm", "5 mm"], ["0 mm", "-5 mm"]]
    stiffness = ["1e9 kN/mm", "20 N/mm", "20 N/mm"]
  }
}

gyro "stack" {
  on   = plate.base
  at   = ["0 mm", "0 mm"]
  mass = "12 g"
  size = ["20 mm", "20 mm", "6 mm"]
}
