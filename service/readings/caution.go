package readings

// CautionCode is a stable name for a reservation about an answer.
type CautionCode string

// The cautions.
const (
	Assumed           CautionCode = "assumed"             // a number or an uncertainty that was not given
	QualityUnknown    CautionCode = "quality_unknown"     // a state too close to saturation to tell vapour from liquid
	NoSuchState       CautionCode = "no_such_state"       // a place without a state of the refrigerant
	StreamUnknown     CautionCode = "stream_unknown"      // readings of a stream that do not tell its heat
	StatesUnused      CautionCode = "states_unused"       // a layout whose states do not size it
	FirstOrderRefuted CautionCode = "first_order_refuted" // random draws contradict the law of propagation
	MoreDrawsNeeded   CautionCode = "more_draws_needed"   // too few random draws
	DrawsFailed       CautionCode = "draws_failed"        // random draws without a result
	NoExpectedValues  CautionCode = "no_expected_values"  // the given machine has no operating point here
	BeyondMachine     CautionCode = "beyond_machine"      // the given machine breaks a limit here
	CircularMap       CautionCode = "circular_map"        // the machine's map takes part in a result
	FewSamples        CautionCode = "few_samples"         // a mean of fewer than 30
	WeatherMoves      CautionCode = "weather_moves"       // a drift that source and sink may explain
	Safety            CautionCode = "safety"              // who may work on a machine
)

// Caution is a reservation about an answer.
type Caution struct {
	Code    CautionCode
	Field   string // path of the reading or field it speaks of, or ""
	Label   string // place in the circuit, or ""
	Message Message
	Cause   error // of a property model or of the machine's, or nil
}

// safety goes with every result.
var safety = Caution{Code: Safety, Message: message(
	"results are indications: refrigerant circuits are under pressure and may be flammable or toxic, and electrical parts are live; only certified persons connect gauges, charge or open a circuit, and local codes and the maker's documents govern; refrigerant is never added on one symptom")}
