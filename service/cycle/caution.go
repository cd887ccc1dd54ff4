package cycle

// CautionCode is a stable name for a reservation about an answer.
type CautionCode string

// The cautions.
const (
	Assumed                   CautionCode = "assumed"                     // a number the request did not give
	PerUnitFlow               CautionCode = "per_unit_flow"               // no size: everything per 1 kg/s
	WetSuction                CautionCode = "wet_suction"                 // liquid at the compressor suction
	WetDischarge              CautionCode = "wet_discharge"               // liquid at the compressor discharge
	FlashBeforeValve          CautionCode = "flash_before_valve"          // vapour at the expansion valve inlet
	SubcoolingBelowSink       CautionCode = "subcooling_below_sink"       // liquid leaves the condenser colder than what cools it
	SubcooledBelowEvaporation CautionCode = "subcooled_below_evaporation" // liquid colder than the evaporator
	HotDischarge              CautionCode = "hot_discharge"               // above a usual limit for oil and valves
	BelowAtmosphere           CautionCode = "below_atmosphere"            // a pressure below atmosphere draws air in
	NearCritical              CautionCode = "near_critical"               // condensing within 2 % of the critical pressure
	HighPressureRatio         CautionCode = "high_pressure_ratio"         // above what one stage usually does
	Extrapolated              CautionCode = "extrapolated"                // a state outside the validity of the equation of state
	OptimumAtLimit            CautionCode = "optimum_at_limit"            // the search ended at its bound
	CorrelationRange          CautionCode = "correlation_range"           // a correlation outside its stated range
	OptimisticEjector         CautionCode = "optimistic_ejector"          // one-dimensional ejector model with assumed losses
)

// Caution is a reservation about an answer.
type Caution struct {
	Code    CautionCode
	Field   string // path of the request's field it speaks of, or ""
	Label   string // place in the circuit, or ""
	Message Message
}
