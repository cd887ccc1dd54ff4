package machine

// CautionCode is a stable name for a reservation about an answer. Those of a cycle's cautions appear too.
type CautionCode string

// The cautions.
const (
	Assumed             CautionCode = "assumed"              // a number that was not given
	BeyondEnvelope      CautionCode = "beyond_envelope"      // outside what the maker allows
	EdgeCaution         CautionCode = "envelope_edge"        // within 0.5 K of the edge
	EnvelopeMissing     CautionCode = "envelope_missing"     // nothing says what the maker allows
	LimitBroken         CautionCode = "limit_broken"         // one of the limits
	MapExtrapolated     CautionCode = "map_extrapolated"     // a map outside its area
	SpeedClamped        CautionCode = "speed_clamped"        // the demand lies outside the range of speeds
	FreezingRisk        CautionCode = "freezing_risk"        // surface close to or below the freezing point
	Frost               CautionCode = "frost"                // frost forms on the surface
	Oversized           CautionCode = "exchanger_oversized"  // it could do more at any level
	SmallPinch          CautionCode = "small_pinch"          // below what exchangers are built for
	EvaporationHeld     CautionCode = "evaporation_held"     // the valve holds the evaporation, the superheat rises
	StreamExtrapolated  CautionCode = "stream_extrapolated"  // a secondary fluid outside the range of its properties
	SingleCoefficient   CautionCode = "single_coefficient"   // one heat transfer coefficient for all zones
	ManufacturerGoverns CautionCode = "manufacturer_governs" // the maker's current data sheet decides
	RankDeficient       CautionCode = "rank_deficient"       // measured points do not carry ten coefficients
)

// Caution is a reservation about an answer.
type Caution struct {
	Code    CautionCode
	Field   string // path of the field it speaks of, or ""
	Label   string // place in the circuit, or ""
	Message Message
}
