package airframefile

import (
	"fmt"

	"hushframe/core/mechanics/airframe"
	"hushframe/core/mechanics/outline"
	"hushframe/core/pipeline/fault"
)

// File is an airframe file with every expression evaluated, SI units throughout, blocks in the order of the file.
type File struct {
	Path      string // as given to Parse
	Name      string // of the airframe block, "" when there is none
	About     string
	AllUpMass float64 // kg, 0 when not stated
	LossFloor float64

	Inputs    []Input
	Materials map[string]airframe.Material // those of the file by name
	Plates    []Plate
	Copies    []Copy
	Joints    []Joint
	Contacts  []Contact
	Bolts     Bolts
	Bolted    []Bolt
	Standoffs []Standoff
	Rotors    []Rotor
	Lumps     []Lump // the gyro is among them
}

// Part is what every block has: its kind, name and place in the file.
type Part struct {
	Kind, Name string
	File       string
	Line       int
	lines      map[string]int // of attributes
}

// String names the part as messages do: rotor "fr".
func (p Part) String() string {
	if p.Name == "" {
		return p.Kind
	}
	return fmt.Sprintf("%s %q", p.Kind, p.Name)
}

// Fault makes a fault of kind Input at an attribute of the part, or at its head when attribute is "" or was left out.
func (p Part) Fault(attribute, format string, args ...any) *fault.Error {
	line := p.Line
	if l, ok := p.lines[attribute]; ok {
		line = l
	}
	f := fault.New(fault.Input, format, args...).In("read airframe", p.File)
	if line == 0 {
		return f.Of("airframe")
	}
	place := fmt.Sprintf("line %d, %s", line, p)
	if _, ok := p.lines[attribute]; ok {
		place += ", " + attribute
	}
	return f.At("%s", place).Of("airframe")
}

// Opt is a number that may be left out.
type Opt struct {
	Value float64
	Given bool
}

// Or gives the number, or the default when it was left out.
func (o Opt) Or(missing float64) float64 {
	if o.Given {
		return o.Value
	}
	return missing
}

// Input is a value that a job may set.
type Input struct {
	Name, About string
	Value       string // as text
	Overridden  bool
}

// Plate is a declared plate.
type Plate struct {
	Part
	Outline   string
	Layers    []string
	Units     string
	Pick      *outline.Point // in metres
	Tolerance Opt
	Thickness float64
	Material  string
	Plies     []airframe.Ply // angles from the fibre direction
	Fibre     float64
	At        airframe.Vec
	Origin    outline.Point
	Turn      float64
	Flip      bool
	Tilt      [2]float64
}

// Copy is a plate made from another one.
type Copy struct {
	Part
	Of     string
	Mirror [3]bool // axes that change sign
	Turn   float64
	Centre outline.Point
	Move   airframe.Vec
}

// Joint is a declared elastic connection. Where Screw is given, components that are not come from plates and screw;
// those that are, or all without Screw, stand in Stiffness, infinite ones being rigid or to be computed.
type Joint struct {
	Part
	airframe.Joint
	Screw         Opt // nominal diameter
	ScrewMaterial string
	Bearing       bool // the screw's shank carries what goes across, not friction
}

// Contact is plates pressed together, a glued seam or a key.
type Contact struct {
	Part
	Sort   airframe.ContactKind
	Plates []string // pressed: every two of them that touch; else edge and face, or the two that the key stops
	// Pressed: shape of the region, and stiffness (N/m³) where it is not computed from the plates.
	At            *outline.Point
	Diameter      Opt
	Size          *[2]float64
	Turn          float64
	Bonded        bool
	Normal, Shear Opt
	// Lines.
	From, To   airframe.Vec
	Flat       bool // From and To have no height
	Glue       *Glue
	Stiffness  [3]float64 // of the whole line: seam along, across, normal; key square to it first
	LossFactor float64
	Low, High  float64
	Origin     string
}

// Glue is the adhesive of a seam.
type Glue struct {
	Modulus, Poisson, Thickness, Width float64
}

// Fastening is what bolts may have in common.
type Fastening struct {
	Clamp, Mass Opt
	Joint       string
}

// Bolts says how bolts are inferred.
type Bolts struct {
	Part
	Infer             bool
	Smallest, Largest float64 // hole diameters
	Gap               float64
	Fastening
	Remove []string
	Change map[string]Fastening
}

// Bolt is one or several declared bolts.
type Bolt struct {
	Part
	Through []string
	Places  []outline.Point
	Hole    Opt
	Fastening
}

// Standoff is one or several pillars.
type Standoff struct {
	Part
	Between      [2]string
	Places       []outline.Point
	Outer, Inner float64
	Material     string
	Clamp        Opt
	ScrewMass    float64
}

// Rotor is a motor with its propeller.
type Rotor struct {
	Part
	On                string
	Lower             bool // stands on the lower face
	At                *outline.Point
	Base              Opt
	Mass              float64
	Height            float64
	Diameter, Length  Opt
	Inertia           []float64 // 0, 3 or 6 tensor elements
	Bell, Stator      *Solid    // both or neither; Mass and Height are then those of both
	HubHeight         Opt
	PropellerMass     Opt
	PropellerDiameter Opt
	PolarInertia      Opt
	SpinningMass      Opt
	Blades            Opt
	Spin              int
	HoverSpeed        float64
	MaxSpeed          float64
	Grade             Opt
}

// Solid is the bell or stator of a motor: a hollow cylinder about the shaft, or a given inertia.
type Solid struct {
	Mass, Height            float64 // height of its centre of gravity above the face
	Diameter, Inner, Length float64
	Inertia                 []float64
}

// Lump is a rigid body that is no rotor.
type Lump struct {
	Part
	Gyro  bool
	On    string
	Lower bool
	At    outline.Point
	Mass  float64
	Size  airframe.Vec // of the box, or of that round the cylinder
	// Diameter is given of a cylinder, Axis the axis of Size along which it lies.
	Diameter Opt
	Axis     int
	Offset   [2]float64 // centre of gravity from the middle, along the box
	Turn     float64
	Lift     float64
	Height   Opt
	Inertia  []float64
	Pad      *[2]float64
	Mount    *Mount
}

// Mount is a set of equal springs below a lump.
type Mount struct {
	Part
	Word      string // the kind in the user's words
	Places    []outline.Point
	Height    float64
	Stiffness [6]float64
	Loss      [6]float64
	Law       airframe.Law
	Preload   float64
	Origin    string
	Pad       Opt
}
