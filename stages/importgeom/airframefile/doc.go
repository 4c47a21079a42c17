// Package airframefile reads airframe.hcl, the description of one frame, into plain values in SI units.
//
// A file holds blocks in any order. Lengths, angles, masses and the like are texts with a unit ("2 mm", "-40 deg",
// "33 g"); counts and loss factors are bare numbers. Parts are referred to as plate.NAME, joint.NAME and
// input.NAME, without quotes; materials by their name in quotes. Paths are relative to the folder of the airframe file.
//
// Axes: x forward, y left, z up. `at` of a plate is a point of its LOWER face; `at` and `places` of everything else
// are x, y of the airframe. Attributes marked * must be given; all others have the default named.
//
//	airframe "NAME" {                 # at most one
//	  about       = "five-inch survey frame, revision A"
//	  all_up_mass = "652 g"           # compared with the sum of the parts, never used to scale it
//	  loss_floor  = 0.002             # loss factor added everywhere (air, cables); default 0
//	}
//
//	input "arm_thickness" {           # overridden by the argument `with` of the import stage
//	  value = "5 mm"                  # * text with unit, number, text, truth or list
//	  about = "carbon plate the arms are cut from"
//	}
//
//	material "my-carbon" {            # new, or one of the table under its name to change it
//	  like    = "carbon-0-90"         # take all that is not given from this one
//	  E1      = "58 GPa"              # orthotropic: E1 E2 G12 nu12 and, by default equal to G12, G13 G23
//	  E2      = "56 GPa"
//	  G12     = "4.2 GPa"
//	  nu12    = 0.06
//	  G13     = "3 GPa"
//	  G23     = "3 GPa"
//	  E3      = "9 GPa"               # through the thickness, for joints; default 2.7 times the transverse shear modulus
//	  E       = "70 GPa"              # or isotropic: E nu, and nothing of the above
//	  nu      = 0.33
//	  density = "1550 kg/m^3"
//	  loss_factor = 0.008
//	  scatter = 0.1                   # relative standard uncertainty of the moduli; default unknown
//	  origin  = "three-point bending, batch 12"
//	}
//
//	plate "arm_fr" {
//	  outline   = "cut/arm.dxf"       # * cut file
//	  layer     = "cut"               # one layer or a list; default all
//	  units     = "mm"                # needed when the file does not say; wins when it does (and this is noted)
//	  pick      = ["10 mm", "0 mm"]   # a point (outline axes) inside the outline meant, when the file has several
//	  tolerance = "0.05 mm"           # ends closer than this are joined; default 0.02 mm
//	  thickness = input.arm_thickness # * unless plies are given
//	  material  = "carbon-0-90"       # * unless plies are given
//	  plies     = [                   # from the lower to the upper face
//	    { material = "carbon-0-90", thickness = "0.25 mm", angle = "45 deg" },
//	  ]
//	  fibre     = "0 deg"             # direction 1 of the material from the outline's x axis; default 0
//	  at        = ["62 mm", "-48 mm", "2 mm"]  # where `origin` of the lower face goes; default 0, 0, 0
//	  origin    = ["0 mm", "0 mm"]    # point of the outline, in its own axes; default 0, 0
//	  turn      = "-40 deg"           # about z through that point; default 0
//	  flip      = true                # turned over about the outline's x axis first; default false
//	  tilt      = ["3 deg", "0 deg"]  # after `turn`, about airframe x, then about airframe y; default level
//	}
//
//	copy "arm_fl" {                   # another plate, referred to as plate.arm_fl; bodies on it are declared by themselves
//	  of     = plate.arm_fr           # *
//	  mirror = "y"                    # airframe axis (or list of axes) that changes sign
//	  turn   = "90 deg"               # then about airframe z through `centre`; default 0
//	  centre = ["0 mm", "0 mm"]       # default 0, 0
//	  move   = ["0 mm", "0 mm", "20 mm"]  # then shifted; default 0
//	}
//
//	joint "sandwich" {                # joint group in bolt axes: z along the bolt, x along the lower plate's x
//	  screw  = "3 mm"                 # nominal diameter: stiffness from the plates and the screw (package fastener has the formulas)
//	  screw_material = "steel"        # default steel
//	  grip   = "friction"             # what carries sideways: "friction" (default) or "bearing" of the shank in its hole
//	  x  = "90 kN/mm"                 # components given go before; those left out are computed, or rigid without a screw
//	  y  = "90 kN/mm"
//	  z  = "200 kN/mm"
//	  rx = "900 N*m/rad"
//	  ry = "900 N*m/rad"
//	  rz = "2500 N*m/rad"
//	  preload     = "600 N"           # of each bolt, noted
//	  loss_factor = 0.02              # default 0
//	  low  = 0.3                      # range of a common factor on the stiffness of the group; default unknown,
//	  high = 3                        # and 0.2 to 2 where it is computed
//	  within_factor = 3               # instead of both: from a third to three times
//	  origin = "pulled on the bench"  # default "airframe file", or the formula
//	}
//
//	pressed "faces" {                 # faces of plates that press on each other; a joint group of its own
//	  plates = [plate.bottom, plate.arm_fl, plate.clamp]  # * every two of them that touch and overlap
//	  at     = ["20 mm", "0 mm"]      # with `size` or `diameter` the region; default wherever they overlap
//	  size   = ["30 mm", "12 mm"]
//	  turn   = "0 deg"                # of the size, about z
//	  faces  = "bonded"               # default, or "normal-only": free to slide
//	  normal = "40 N/mm3"             # stiffness per area square to the faces and along them; default that of the halves of the plates in a row
//	  shear  = "15 N/mm3"
//	  loss_factor, low, high, within_factor, origin  # as in joint; the range defaults to 0.03 to 1 where it is computed
//	}                                 # where a bolt clamps both plates the stiffness is the bolt's alone
//
//	seam "fin" {                      # a glued line, mostly the edge of a plate on the face of another; a joint group
//	  between = [plate.fin, plate.top]  # * the edge and the face
//	  from    = ["0 mm", "5 mm", "30 mm"]  # * ends, airframe x, y, z
//	  to      = ["20 mm", "5 mm", "30 mm"]  # *
//	  glue {                          # * or stiffness
//	    modulus   = "2 GPa"           # *
//	    nu        = 0.35              # default 0.35
//	    thickness = "0.2 mm"          # *
//	    width     = "2 mm"            # * across the line
//	  }
//	  stiffness = ["9 kN/mm", "9 kN/mm", "25 kN/mm"]  # of the whole line: along, across, square to the face
//	}
//
//	key "root" {                      # a slot, key or tongue that stops a plate within its plane; a joint group
//	  between   = [plate.arm_fl, plate.bottom]  # *
//	  from      = ["20 mm", "6 mm"]   # * ends of the flank that bears, x, y, or x, y, z
//	  to        = ["32 mm", "6 mm"]   # *
//	  stiffness = "40 kN/mm"          # * of the whole flank, square to it; free along it
//	}
//
//	bolts {                           # at most one: how bolts are inferred from coaxial holes of plates that touch
//	  infer    = true                 # default true
//	  smallest = "2 mm"               # hole diameters that count; defaults 2 mm and 5.5 mm
//	  largest  = "5.5 mm"
//	  gap      = "0.2 mm"             # faces closer than this touch; default 0.2 mm
//	  clamp    = "6 mm"               # diameter of the clamped disc; default 1.8 times the largest hole of the stack
//	  mass     = "1.1 g"              # each, with washer and nut; default estimated for steel from hole and stack
//	  joint    = joint.sandwich       # default rigid
//	  remove   = ["bolt-3"]           # inferred bolts that are none, by name
//	  change   = { "bolt-1" = { mass = "2 g", clamp = "8 mm", joint = joint.soft } }  # by name of a bolt, or of a group: "bottom+arm_fl+clamp"
//	}
//
//	bolt "keel" {                     # a bolt where no holes say so; replaces an inferred one at its place
//	  through = [plate.bottom, plate.top]  # * two or more plates whose faces touch
//	  at      = ["0 mm", "-20 mm"]    # * or `places`, a list of such; then the bolts are keel-1, keel-2, ...
//	  hole    = "3 mm"                # default found at the place, else 3 mm
//	  clamp   = "6 mm"                # as in bolts
//	  mass    = "1.1 g"
//	  joint   = joint.sandwich
//	}
//
//	standoff "post" {
//	  between    = [plate.bottom, plate.top]  # * lower and upper plate
//	  at         = ["20 mm", "15 mm"] # * or `places`; then the standoffs are post-1, post-2, ...
//	  outer      = "5 mm"             # * diameter
//	  inner      = "2.5 mm"           # bore; default 0
//	  material   = "aluminium"        # *
//	  clamp      = "6 mm"             # diameter of the clamped disc at both ends; default `outer`
//	  screw_mass = "0.6 g"            # of the screw at each end, head included; default 0
//	}
//
//	rotor "fr" {
//	  on           = plate.arm_fr     # *
//	  side         = "upper"          # face it stands on, "upper" or "lower"; default upper
//	  at           = ["80 mm", "-80 mm"]  # shaft; default the centre of the only motor hole pattern of the plate
//	  base         = "19 mm"          # diameter of the footprint; default motor diameter, else from the pattern
//	  mass         = "33 g"           # * motor with its screws; with the propeller when no propeller_mass is given
//	  height       = "12 mm"          # * motor's centre of gravity above the face
//	  diameter     = "28 mm"          # motor as a cylinder; default from the mass at 2800 kg/m^3
//	  length       = "22 mm"          # of the cylinder; default 2 × height
//	  inertia      = ["2.6e-6 kg*m^2", "2.6e-6 kg*m^2", "3.1e-6 kg*m^2"]  # of the motor about its centre; default from the cylinder
//	  bell {                          # instead of mass, height and inertia: what spins, and below, what does not
//	    mass     = "18 g"             # *
//	    height   = "15 mm"            # * of its centre of gravity above the face
//	    diameter = "28 mm"            # * a hollow cylinder, unless inertia is given
//	    inner    = "23 mm"            # default 0
//	    length   = "13 mm"            # *
//	    inertia  = [...]              # three or six elements about its centre of gravity
//	  }
//	  stator { ... }                  # the same, with the screws
//	  hub_height   = "26 mm"          # propeller disc above the face; default 2 × height
//	  propeller_mass     = "4.2 g"    # default 0
//	  propeller_diameter = "127 mm"   # default none
//	  polar_inertia      = "5.1e-6 kg*m^2"  # of all that spins; default estimated
//	  spinning_mass      = "19 g"     # default half the motor and the propeller
//	  blades       = 3                # default 2
//	  spin         = "counterclockwise"  # * or "clockwise", seen from above
//	  hover_speed  = "16000 rpm"      # *
//	  max_speed    = "33000 rpm"      # * maximum service speed
//	  balance_grade = "6.3 mm/s"      # ISO 21940-11 at max_speed; default 6.3 mm/s
//	}
//
//	lump "battery" {                  # any rigid body: battery, camera, receiver
//	  on      = plate.top             # *
//	  side    = "upper"
//	  at      = ["-5 mm", "0 mm"]     # * centre
//	  mass    = "190 g"               # *
//	  size    = ["75 mm", "36 mm", "32 mm"]  # * box along x, y, z before `turn`
//	  diameter = "20 mm"              # or a cylinder: with length and axis ("x", "y" or "z", default "z") instead of size
//	  turn    = "0 deg"               # about z; default 0
//	  offset  = ["2 mm", "0 mm"]      # centre of gravity from the middle, along the box; default 0
//	  lift    = "0 mm"                # underside of the box above the face; default 0
//	  height  = "16 mm"               # centre of gravity above the face; default lift + half the box
//	  inertia = [...]                 # xx yy zz (or also xy xz yz, the tensor elements) about the centre, airframe axes; default box
//	  pad     = ["75 mm", "36 mm"]    # footprint tied rigidly, along the box; default the box; not with `mount`
//	  mount {                         # compliant instead of rigid
//	    like        = "strap-over-foam"  # values of a typical piece; `hushframe stages import` lists them
//	    kind        = "strap"         # any word; default "mount", or that of the typical piece
//	    places      = [["20 mm", "0 mm"], ["-30 mm", "0 mm"]]  # * springs, airframe x, y
//	    height      = "0 mm"          # at which they act on the body, above the face; default 0
//	    stiffness   = ["30 N/mm", "30 N/mm", "60 N/mm"]  # * (unless like) of each, along x, y, z; or six with N*m/rad about x, y, z
//	    loss_factor = 0.15            # or one per component; default 0
//	    preload     = "15 N"          # noted; the stiffness is that under it
//	    origin      = "tapped on the bench"
//	    pad         = "8 mm"          # diameter of the footprint of each; default 6 mm
//	    fractional {                  # at most one law of frequency: k + c (iω)^order, with loss_factor at that frequency
//	      at    = "100 Hz"            # * where stiffness and loss_factor hold
//	      order = 0.2                 # *
//	    }
//	    solid {                       # or a standard linear solid, which brings its own loss: (rise-1)/(2 √rise) at most
//	      at      = "100 Hz"          # * where stiffness holds
//	      rise    = 2.5               # * stiffness at high frequency over that at rest
//	      peak_at = "180 Hz"          # * frequency of the greatest loss
//	    }
//	    table {                       # or measured, straight over the logarithm of frequency, held beyond the ends
//	      frequency   = ["20 Hz", "200 Hz"]
//	      storage     = [1, 1.4]      # by the stiffness given
//	      loss_factor = [0.1, 0.15]
//	    }
//	  }
//	}
//
//	gyro "stack" {                    # exactly one: the body whose rotation is the output; all of lump, and
//	  grommets {                      # the same as mount, with the kind "grommet"
//	    places      = [["15.25 mm", "15.25 mm"], ["15.25 mm", "-15.25 mm"], ["-15.25 mm", "15.25 mm"], ["-15.25 mm", "-15.25 mm"]]
//	    stiffness   = ["25 N/mm", "25 N/mm", "40 N/mm"]
//	    loss_factor = 0.2
//	    pad         = "6 mm"
//	  }
//	}
//
// On a tilted plate x and y of a place mean that point of its mid-surface; bodies stand square to the plate, standoffs along
// airframe z. Nothing can be put by x and y on a plate that stands upright, such as a fin on a seam.
//
// Every default that is used is noted by the stage. Mistakes are gathered and reported with line, offending text
// and the nearest valid name.
package airframefile
