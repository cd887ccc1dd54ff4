package cycle

// Layout is the arrangement of the components in a cycle.
type Layout uint8

// The layouts.
const (
	SingleStage         Layout = iota + 1
	SuctionExchanger           // single stage, liquid subcooled by suction vapour in an internal exchanger
	EconomisedSubcooler        // injection into the compressor, vapour from a subcooler
	EconomisedFlash            // injection into the compressor, vapour from a flash tank
	TwoStageFlash              // two compressors with a flash tank at the intermediate pressure
	TwoStageIntercooled        // two compressors with a closed (coil) or an external (water, air) intercooler
	Cascade                    // two circuits; the lower condenses in the evaporator of the upper
	ParallelCompression        // receiver at an intermediate pressure whose flash gas has its own compressor
	Transcritical              // gas cooler instead of a condenser; combines with others, see [Request.With]
	Ejector                    // ejector expansion, gas cooler only
)

var layoutNames = [...]string{
	"", "single_stage", "suction_exchanger", "economised_subcooler", "economised_flash", "two_stage_flash",
	"two_stage_intercooled", "cascade", "parallel_compression", "transcritical", "ejector",
}

func (l Layout) String() string { return nameOf(layoutNames[:], l) }

// Layouts returns the names of all layouts.
func Layouts() []string { return append([]string(nil), layoutNames[1:]...) }

// ParseLayout returns the layout with that name and reports whether there is one.
func ParseLayout(name string) (Layout, bool) { return parse[Layout](layoutNames[:], name) }

// Purpose says which of the two heat flows is the benefit.
type Purpose uint8

// The purposes.
const (
	Heating Purpose = iota + 1
	Cooling
)

var purposeNames = [...]string{"", "heating", "cooling"}

func (p Purpose) String() string { return nameOf(purposeNames[:], p) }

// ParsePurpose returns the purpose with that name and reports whether there is one.
func ParsePurpose(name string) (Purpose, bool) { return parse[Purpose](purposeNames[:], name) }

// Reference says what an evaporating or condensing temperature of a zeotropic blend means. For a pure refrigerant without
// pressure drop both are the same.
type Reference uint8

// The references.
const (
	Dew  Reference = iota // dew point at the pressure of the outlet
	Mean                  // evaporator: mean of inlet and dew temperature; condenser: mean of bubble and dew point
)

var referenceNames = [...]string{"dew", "mean"}

func (r Reference) String() string { return nameOf(referenceNames[:], r) }

// ParseReference returns the reference with that name and reports whether there is one.
func ParseReference(name string) (Reference, bool) { return parse[Reference](referenceNames[:], name) }
