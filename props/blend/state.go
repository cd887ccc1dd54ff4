package blend

// Property names an intensive property that can fix a state.
type Property uint8

// The properties that can fix a state.
const (
	Temperature    Property = iota + 1 // K
	Pressure                           // Pa
	Density                            // kg/m3
	Enthalpy                           // J/kg
	Entropy                            // J/(kg K)
	InternalEnergy                     // J/kg
	Quality                            // mass fraction of vapour, 0 to 1
)

var propertyNames = [...]string{"", "temperature", "pressure", "density", "enthalpy", "entropy", "internal energy", "quality"}

var propertyUnits = [...]string{"", "K", "Pa", "kg/m3", "J/kg", "J/(kg K)", "J/kg", "kg/kg"}

func (p Property) String() string { return propertyNames[p] }

// Unit returns the SI unit of p.
func (p Property) Unit() string { return propertyUnits[p] }

// Given is a property with its value in SI units.
type Given struct {
	Property Property
	Value    float64
}

// Phase names the kind of a state.
type Phase uint8

// The phases. A state above the critical temperature is supercritical when its pressure is above the critical pressure
// too, and vapour otherwise; below the critical temperature a state denser than saturated liquid is liquid at any
// pressure. Saturated liquid and vapour themselves are liquid with quality 0 and vapour with quality 1.
const (
	AnyPhase Phase = iota
	Liquid
	Vapour
	TwoPhase
	Supercritical
)

var phaseNames = [...]string{"any", "liquid", "vapour", "two_phase", "supercritical"}

func (p Phase) String() string { return phaseNames[p] }

// State is a thermodynamic state of a blend. A property that does not exist in the state's phase is NaN.
type State struct {
	Phase   Phase
	T       float64 // temperature, K
	P       float64 // pressure, Pa
	Rho     float64 // density, kg/m3
	H       float64 // enthalpy, J/kg
	S       float64 // entropy, J/(kg K)
	U       float64 // internal energy, J/kg
	Quality float64 // mass fraction of vapour; NaN outside the envelope

	Cp     float64 // isobaric heat capacity, J/(kg K); NaN inside the envelope
	Cv     float64 // isochoric heat capacity, J/(kg K); NaN inside the envelope
	W      float64 // speed of sound, m/s; NaN inside the envelope
	DPDRho float64 // (dp/d rho) at constant T, Pa m3/kg; NaN inside the envelope
	DPDT   float64 // (dp/dT) at constant density, Pa/K; inside the envelope with both phases in equilibrium
	Z      float64 // compressibility factor p/(rho R T)

	// Mass fractions of both phases in the order of the components, of which one is the blend itself on the bubble and
	// the dew line; nil outside the envelope. The caller must not modify them.
	LiquidComposition, VapourComposition []float64
}
