package readings

import (
	"dewmark/service/cycle"
	"dewmark/service/readings/uncertainty"
)

// Refrigerant is what readings ask of a property model. [*props.Pure] is one. Models with SaturationTemperature,
// which promises that bubble and dew line are one, or with BubbleTemperature and DewTemperature, answer faster.
type Refrigerant = cycle.Refrigerant

// Installation describes a machine and its sensors. Nil pointers and zero structs mean "not given"; where a number that
// matters is then assumed, a result says so in a caution.
type Installation struct {
	Refrigerant Refrigerant // required
	// Layout of the circuit, default [cycle.SingleStage]. With gives what a [cycle.Transcritical] layout is combined with. In
	// layouts with more than one compression the refrigerant's states do not size the machine: capacities come from the
	// secondary streams and from meters alone.
	Layout cycle.Layout
	With   []cycle.Layout

	Site          Site
	Uncertainties map[Reading]Uncertainty
	Correlations  []Correlation
	Shared        []SharedError

	// ShellConductance is the conductance of the compressor's shell to the ambient, W/K: with ShellTemperature and
	// AmbientTemperature it gives the heat loss. Path "shell_conductance".
	ShellConductance *float64
	// SweptVolume is what one turn of the compressor sweeps, m3: with Speed it gives the volumetric efficiency. Path
	// "swept_volume".
	SweptVolume *float64
	// ModelUncertainty is the standard uncertainty of the property model's differences of enthalpy, relative. Nil: 0.3 % for
	// a pure refrigerant, 1 % for a blend. Path "model_uncertainty".
	ModelUncertainty *float64

	// Machine is what the installed machine is compared with. Nil: no expected values, no map, no indications.
	Machine Machine
	// Expansion tells which signs of faults apply. Default: a valve that holds the superheat.
	Expansion Expansion
	// OtherRefrigerants returns refrigerants to try when superheat or subcooling cannot be. Nil: none. It is called only then.
	OtherRefrigerants func() []Refrigerant
}

// Site is where pressures are read.
type Site struct {
	// Gauges says that pressures were read as gauge pressures and AmbientPressure was added to them.
	Gauges bool
	// AmbientPressure in Pa; required where Gauges. Path "site.ambient_pressure".
	AmbientPressure *float64
	// AmbientUncertainty is the standard uncertainty of AmbientPressure in Pa. Nil: 1.7 kPa, because weather changes what
	// follows from the altitude by up to 3 kPa. Path "site.ambient_uncertainty".
	AmbientUncertainty *float64
	// Sealed are the pressures whose sensors are sealed gauges: they count from the standard atmosphere whatever the site.
	// Their readings are corrected from AmbientPressure to it. Path "site.sealed".
	Sealed []Reading
}

// Correlation is the correlation coefficient of the errors of two readings, -1 to 1.
type Correlation struct {
	A, B        Reading
	Coefficient float64
}

// SharedError is an error that some readings have in common, such as that of the calibration of all of them: it moves
// them together and cancels in their differences. It comes on top of their own uncertainties.
type SharedError struct {
	Name     string // as the budget shows it
	Readings []Reading
	Standard float64 // standard uncertainty, in the SI unit of the readings
}

// Expansion is the kind of expansion device.
type Expansion uint8

// The expansion devices.
const (
	ControlledExpansion Expansion = iota // thermostatic or electronic valve: holds the superheat until it is wide open
	FixedOrifice                         // capillary tube or orifice
)

var expansionNames = [...]string{"controlled", "fixed_orifice"}

func (e Expansion) String() string {
	if int(e) >= len(expansionNames) {
		return ""
	}
	return expansionNames[e]
}

// ParseExpansion returns the expansion device with that name and reports whether there is one.
func ParseExpansion(name string) (Expansion, bool) {
	for i, n := range expansionNames {
		if n == name {
			return Expansion(i), true
		}
	}
	return 0, false
}

// Method says how uncertainties are found.
type Method uint8

// The methods.
const (
	GUM        Method = iota // law of propagation, JCGM 100
	MonteCarlo               // that, and random draws to compare with, JCGM 101
)

var methodNames = [...]string{"gum", "monte_carlo"}

func (m Method) String() string {
	if int(m) >= len(methodNames) {
		return ""
	}
	return methodNames[m]
}

// ParseMethod returns the method with that name and reports whether there is one.
func ParseMethod(name string) (Method, bool) {
	for i, n := range methodNames {
		if n == name {
			return Method(i), true
		}
	}
	return 0, false
}

// Options say how results are wanted.
type Options struct {
	Method Method
	// Coverage is the probability that belongs to expanded uncertainties. 0: that of two standard uncertainties of a normal
	// distribution, 95.45 %.
	Coverage uncertainty.Coverage
	// Draws are used by MonteCarlo: at least 1000 and at most [MostDraws]. Its Coverage is taken from above. Paths
	// "draws.count", "draws.most" and "draws.digits".
	Draws uncertainty.Draws
}
