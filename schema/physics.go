package schema

// Physics is a sweep's resolved description of the guide: everything that
// decides a mode, and nothing else. A change of the sweep's name, of its
// windows or of an axis' extent leaves it as it was.
type Physics struct {
	Format     int                 `json:"format"` // FormatPhysics
	Materials  map[string]Material `json:"materials"`
	Parameters []Parameter         `json:"parameters"` // in file order
	Section    Section             `json:"section"`
	Equation   string              `json:"equation"`       // auto, full-vector or semi-vectorial
	Modes      int                 `json:"modes"`          // the most to report at a point
	Accuracy   Accuracy            `json:"accuracy"`       // what was asked for
	Keep       string              `json:"keep,omitempty"` // points where it is false are excluded
}

// FormatPhysics is the version of what a Physics means. It changes whenever
// the same Physics would give other numbers, so that tiles solved before
// are not taken for tiles solved now.
const FormatPhysics = 1

// Number is a literal in SI units (angles in radians) or, where Parameter
// is set, the value of that parameter.
type Number struct {
	Value     float64 `json:"value,omitempty"`
	Parameter string  `json:"parameter,omitempty"`
}

// Kind says what a parameter is.
type Kind string

// The kinds of parameter.
const (
	Fixed   Kind = "fixed"   // one value for the whole sweep
	Axis    Kind = "axis"    // an axis of the grid, or a column of a points file
	Derived Kind = "derived" // an expression of other parameters
)

// Parameter is one named number of a sweep. Value is set for a fixed one,
// Expr for a derived one; an axis has its values in the tile.
type Parameter struct {
	Name      string    `json:"name"`
	Kind      Kind      `json:"kind"`
	Dimension Dimension `json:"dimension"`
	Value     float64   `json:"value,omitempty"` // SI, angles in radians
	Expr      string    `json:"expr,omitempty"`
}

// Dimension holds the exponents of a physical quantity. Angle is kept apart
// although it has no dimension in the SI, so that an angle is never taken
// for a bare number.
type Dimension struct {
	Length      int `json:"m,omitempty"`
	Mass        int `json:"kg,omitempty"`
	Time        int `json:"s,omitempty"`
	Current     int `json:"A,omitempty"`
	Temperature int `json:"K,omitempty"`
	Angle       int `json:"rad,omitempty"`
}

// Accuracy is what the sweep asks for, absolute; zero means not asked.
type Accuracy struct {
	Neff          float64 `json:"neff,omitempty"`
	Ng            float64 `json:"ng,omitempty"`
	GVDPs2PerKm   float64 `json:"gvd_ps2_per_km,omitempty"`
	Beta3Ps3PerKm float64 `json:"beta3_ps3_per_km,omitempty"`
}

// Material is one material. Exactly one of Named, Index, Permittivity,
// Sellmeier, Table, Axes and Conductivity is set.
type Material struct {
	Named        string     `json:"named,omitempty"`
	Index        *Number    `json:"index,omitempty"`
	Extinction   *Number    `json:"extinction,omitempty"` // with Index, Sellmeier or Named
	Permittivity *Number    `json:"permittivity,omitempty"`
	LossTangent  *Number    `json:"loss_tangent,omitempty"` // with Permittivity
	Sellmeier    *Sellmeier `json:"sellmeier,omitempty"`
	Table        *Table     `json:"table,omitempty"`
	Axes         *Axes      `json:"axes,omitempty"`
	Conductivity *Number    `json:"conductivity,omitempty"` // S/m: a metal

	AddIndex             *Number `json:"add_index,omitempty"`
	ThermoOptic          *Number `json:"thermo_optic,omitempty"`          // 1/K
	ReferenceTemperature *Number `json:"reference_temperature,omitempty"` // K; 293.15 where absent
}

// Metal reports whether the material is a conductor.
func (m Material) Metal() bool { return m.Conductivity != nil }

// Sellmeier is n^2 = Constant + sum of B L^2/(L^2 - C^2), L and C in
// micrometres.
type Sellmeier struct {
	Constant Number      `json:"constant"`
	Terms    [][2]Number `json:"terms"` // B, C
}

// Table is a measured index over wavelength, in rising wavelength. The file
// it came from is a name for messages only.
type Table struct {
	File        string    `json:"file"`
	WavelengthM []float64 `json:"wavelength_m"`
	N           []float64 `json:"n"`
	K           []float64 `json:"k,omitempty"` // same length as N, or absent
}

// Axes is a material with its principal axes along those of the section.
type Axes struct {
	X Material `json:"x"`
	Y Material `json:"y"`
	Z Material `json:"z"`
}

// Section is the guide's cross-section: exactly one of its pointers is set.
type Section struct {
	Layers   *Layers   `json:"layers,omitempty"`
	Circular *Circular `json:"circular,omitempty"`
	Pipe     *Pipe     `json:"pipe,omitempty"`
}

// Layers is a stack, bottom to top.
type Layers struct {
	Layers       []Layer `json:"layers"`
	GroundBottom bool    `json:"ground_bottom,omitempty"` // a metal plane in place of the half-space
	GroundTop    bool    `json:"ground_top,omitempty"`
	WallsWidth   *Number `json:"walls_width,omitempty"` // side walls this far apart
}

// Layer is one layer; a half-space has no thickness.
type Layer struct {
	Name      string  `json:"name,omitempty"`
	Material  string  `json:"material"`
	Thickness *Number `json:"thickness,omitempty"`
	Fill      string  `json:"fill,omitempty"` // what stands beside the strips
	Strips    []Strip `json:"strips,omitempty"`
}

// Strip is one strip of a layer.
type Strip struct {
	Name          string  `json:"name,omitempty"`
	Material      string  `json:"material,omitempty"` // the layer's where empty
	Centre        Number  `json:"centre"`
	Width         Number  `json:"width"`
	WidthAt       string  `json:"width_at,omitempty"` // top (empty), foot or middle
	SidewallLeft  *Number `json:"sidewall_left,omitempty"`
	SidewallRight *Number `json:"sidewall_right,omitempty"`
}

// Circular is a round guide, inside out. With Wall set the last layer has a
// radius too.
type Circular struct {
	Layers []Ring `json:"layers"`
	Orders [2]int `json:"orders"` // lowest and highest azimuthal order
	Wall   string `json:"wall,omitempty"`
}

// Ring is one layer of a round guide. Exactly one of Material and Profile
// is set; Profile is an expression for the index over r and radius.
type Ring struct {
	Name     string  `json:"name,omitempty"`
	Material string  `json:"material,omitempty"`
	Radius   *Number `json:"radius,omitempty"`
	Profile  string  `json:"profile,omitempty"`
}

// Pipe is a metal tube; exactly one of its shapes is set.
type Pipe struct {
	Rectangle  *Rectangle  `json:"rectangle,omitempty"`
	Circle     *Circle     `json:"circle,omitempty"`
	Coax       *Coax       `json:"coax,omitempty"`
	Ellipse    *Rectangle  `json:"ellipse,omitempty"`
	Polygon    [][2]Number `json:"polygon,omitempty"`
	Fill       string      `json:"fill,omitempty"`
	FillAlong  string      `json:"fill_along,omitempty"` // x or y, with FillLayers
	FillLayers []Layer     `json:"fill_layers,omitempty"`
	Wall       string      `json:"wall,omitempty"` // perfect where empty
	Evanescent int         `json:"evanescent,omitempty"`
}

// Rectangle is a width along x and a height along y.
type Rectangle struct {
	Width  Number `json:"width"`
	Height Number `json:"height"`
}

// Circle is a round tube.
type Circle struct {
	Diameter Number `json:"diameter"`
}

// Coax is a round tube with a round conductor in it.
type Coax struct {
	Inner  Number  `json:"inner"`            // diameter
	Outer  Number  `json:"outer"`            // diameter
	Offset *Number `json:"offset,omitempty"` // of the inner conductor along x
}

// Wavelength and Frequency are the reserved names of the one parameter
// that says at which frequency a point is.
const (
	Wavelength  = "wavelength"
	Frequency   = "frequency"
	Temperature = "temperature" // reserved: acts through thermo_optic
)

// Base lists the numeric parameters (fixed or axis) other than wavelength
// and frequency, in file order. Sensitivities are with respect to these,
// and a solver's point is the angular frequency followed by their values.
func (p *Physics) Base() []string {
	var names []string
	for _, q := range p.Parameters {
		if q.Kind != Derived && q.Name != Wavelength && q.Name != Frequency {
			names = append(names, q.Name)
		}
	}
	return names
}

// Parameter finds a parameter by name.
func (p *Physics) Parameter(name string) (Parameter, bool) {
	for _, q := range p.Parameters {
		if q.Name == name {
			return q, true
		}
	}
	return Parameter{}, false
}
