package machine

// Compressor is described by maps, or by its swept volume and the laws of its efficiencies.
type Compressor struct {
	// Maps holds one map, or several of different speeds in ascending order, between which flow and power are interpolated.
	Maps []Map
	// SweptVolume is what one revolution sweeps, m3: swept volume flow over speed. With maps it is not needed, but checks
	// them. Path "machine.compressor.swept_volume".
	SweptVolume *float64
	// IsentropicEfficiency and VolumetricEfficiency are laws in the pressure ratio between the compressor's flanges; not
	// with maps. Power is whatever the efficiency refers to, at the shaft or at the terminals; a map's is as its maker
	// declares. Paths "machine.compressor.isentropic_efficiency" and "….volumetric_efficiency".
	IsentropicEfficiency *Law
	VolumetricEfficiency *Law
	HeatLossFraction     *float64 // "….heat_loss_fraction": heat to the ambient over the power, 0 up to 1; default 0
	// DriveEfficiency is the power of the compressor over that at the terminals, 0 to 1; default 1. Path "….drive_efficiency".
	DriveEfficiency *float64

	Speed    *float64 // 1/s, where a condition gives none
	SpeedMin *float64 // "….speed_min", 1/s; default the only speed, or that of the slowest map
	SpeedMax *float64 // "….speed_max", 1/s; likewise

	// Envelopes are the areas that the maker allows, one for all speeds or several of different speeds in ascending order.
	// With maps they may stand there instead.
	Envelopes []Envelope
}

// LawKind is the form of an efficiency law.
type LawKind uint8

// The forms of efficiency laws, r being the pressure ratio.
const (
	PolynomialLaw LawKind = iota // c0 + c1 r + c2 r^2, one to three coefficients
	ClearanceLaw                 // c0 - c1 (r^(1/c2) - 1): losses c1 by re-expansion with exponent c2; volumetric only
)

var lawNames = [...]string{"polynomial", "clearance"}

func (k LawKind) String() string {
	if int(k) >= len(lawNames) {
		return ""
	}
	return lawNames[k]
}

// ParseLaw returns the form with that name and reports whether there is one.
func ParseLaw(name string) (LawKind, bool) {
	for i, n := range lawNames {
		if n == name {
			return LawKind(i), true
		}
	}
	return 0, false
}

// Law is an efficiency as a function of the pressure ratio.
type Law struct {
	Kind         LawKind
	Coefficients []float64
}

// MapKind is the form of a map's polynomials.
type MapKind uint8

// The forms of maps, with S the dew temperature at suction, D that at discharge, both at the flanges and in the units of the
// data sheet.
const (
	// TenCoefficient is X = c1 + c2 S + c3 D + c4 S² + c5 S D + c6 D² + c7 S³ + c8 D S² + c9 S D² + c10 D³ (AHRI 540, EN 12900).
	TenCoefficient MapKind = iota
	// Biquadratic is X = c1 + c2 S + c3 S² + c4 D + c5 D² + c6 S D + c7 S² D + c8 S D² + c9 S² D² (Stoecker and Jones,
	// Refrigeration and Air Conditioning).
	Biquadratic
)

var mapNames = [...]string{"ten_coefficient", "biquadratic"}

func (k MapKind) String() string {
	if int(k) >= len(mapNames) {
		return ""
	}
	return mapNames[k]
}

// MapKinds returns the names of all forms of maps.
func MapKinds() []string { return append([]string(nil), mapNames[:]...) }

// ParseMapKind returns the form of map with that name and reports whether there is one.
func ParseMapKind(name string) (MapKind, bool) {
	for i, n := range mapNames {
		if n == name {
			return MapKind(i), true
		}
	}
	return 0, false
}

// Map is the rating of a compressor at one speed by polynomials in S and D.
type Map struct {
	Kind     MapKind
	MassFlow []float64 // "….mass_flow", the coefficients from c1 on
	Capacity []float64 // cooling capacity instead of MassFlow
	Power    []float64
	Units    MapUnits
	// PressureAxis says that D is the discharge pressure, as in transcritical maps. Path "….pressure_axis".
	PressureAxis bool
	// SuctionSuperheat or ReturnGasTemperature is the state of the suction gas that the map was rated with; exactly one. Path
	// "….suction_superheat", K, and "….return_gas_temperature", K.
	SuctionSuperheat     *float64
	ReturnGasTemperature *float64
	Subcooling           *float64 // K, of the liquid that a Capacity counts from
	// SuperheatFactor is F in the correction to the real suction density of Dabiri and Rice (ASHRAE Trans. 87, 1981), flow =
	// flow of the map (1 + F (density / density of the map - 1)); default 0.75. Path "….superheat_factor".
	SuperheatFactor *float64
	Speed           *float64 // 1/s; required where there are several maps
	Envelope        []Vertex // area of validity
}

// MapUnits are the units of a data sheet.
type MapUnits struct {
	Temperature Scale
	// MassFlow, Power, Capacity and Pressure are one unit of the data sheet in kg/s, W, W and Pa; 0 means the SI unit itself.
	MassFlow, Power, Capacity, Pressure float64
}

// Scale is a scale of temperature: a reading t means Zero + Unit t in K. The zero value is Celsius.
type Scale struct {
	Unit float64 // K
	Zero float64 // K
}

// Scales of data sheets.
var (
	Celsius    = Scale{1, 273.15}
	Fahrenheit = Scale{5.0 / 9, 273.15 - 32*5.0/9}
)

// Reading returns what the scale shows at temperature T in K.
func (s Scale) Reading(T float64) float64 {
	if s == (Scale{}) {
		s = Celsius
	}
	return (T - s.Zero) / s.Unit
}

// Envelope is the area that a compressor's maker allows, a polygon that need not be convex.
type Envelope struct {
	Vertices []Vertex // in order around the area, at least three, the first not repeated
	Speed    *float64 // 1/s; required where there are several envelopes
	// PressureAxis says that Condensation holds discharge pressures. Path "….pressure_axis".
	PressureAxis bool
	Source       string // document of the maker
}

// Vertex is a corner of an envelope.
type Vertex struct {
	Evaporation  float64 // dew temperature at suction, K
	Condensation float64 // dew temperature at discharge, K; discharge pressure, Pa, with a pressure axis
}
