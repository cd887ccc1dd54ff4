package api

import (
	"reflect"
	"slices"
	"strings"

	"dewmark/service/readings"
)

// naming is a standard of names that building-management systems have for their points.
type naming struct {
	name    string
	reading func(name string) (readings.Reading, bool)
}

// namings are the standards that samples may follow. Both lists are from memory of the standards' vocabularies; what has no
// name there, such as most of the refrigerant's circuit in Brick, keeps the name of the reading.
var namings = [...]naming{
	{"haystack", haystackReading},
	{"brick", brickReading},
}

func namingNames() []string {
	var names []string
	for i := range namings {
		names = append(names, namings[i].name)
	}
	return names
}

func namingOf(name string) (*naming, bool) {
	for i := range namings {
		if namings[i].name == name {
			return &namings[i], true
		}
	}
	return nil, false
}

// brickPoints are classes of points of the Brick ontology (from memory of version 1.3). Supply leaves the plant and return
// comes back to it: of a condenser, supply is what the tower gives.
var brickPoints = map[string]readings.Reading{
	"Hot_Water_Return_Temperature_Sensor":         readings.SinkInletTemperature,
	"Hot_Water_Supply_Temperature_Sensor":         readings.SinkOutletTemperature,
	"Hot_Water_Flow_Sensor":                       readings.SinkVolumeFlow,
	"Hot_Water_Supply_Flow_Sensor":                readings.SinkVolumeFlow,
	"Condenser_Water_Supply_Temperature_Sensor":   readings.SinkInletTemperature,
	"Condenser_Water_Return_Temperature_Sensor":   readings.SinkOutletTemperature,
	"Entering_Condenser_Water_Temperature_Sensor": readings.SinkInletTemperature,
	"Leaving_Condenser_Water_Temperature_Sensor":  readings.SinkOutletTemperature,
	"Condenser_Water_Flow_Sensor":                 readings.SinkVolumeFlow,
	"Chilled_Water_Return_Temperature_Sensor":     readings.SourceInletTemperature,
	"Chilled_Water_Supply_Temperature_Sensor":     readings.SourceOutletTemperature,
	"Entering_Chilled_Water_Temperature_Sensor":   readings.SourceInletTemperature,
	"Leaving_Chilled_Water_Temperature_Sensor":    readings.SourceOutletTemperature,
	"Chilled_Water_Flow_Sensor":                   readings.SourceVolumeFlow,
	"Chilled_Water_Supply_Flow_Sensor":            readings.SourceVolumeFlow,
	"Outside_Air_Temperature_Sensor":              readings.SourceInletTemperature,
	"Outside_Air_Humidity_Sensor":                 readings.SourceInletHumidity,
	"Electric_Power_Sensor":                       readings.CompressorPower,
	"Electrical_Power_Sensor":                     readings.CompressorPower,
}

// brickReading takes a class with or without the prefix of its namespace.
func brickReading(name string) (readings.Reading, bool) {
	if r, ok := brickPoints[strings.TrimPrefix(name, "brick:")]; ok {
		return r, ok
	}
	return readings.ParseReading(name)
}

// haystackPoints are points of Project Haystack by their tags (from memory of version 4), to be written in any order.
var haystackPoints = haystackTable(map[string]readings.Reading{
	"suction refrig pressure":            readings.SuctionPressure,
	"suction refrig temp":                readings.SuctionTemperature,
	"discharge refrig pressure":          readings.DischargePressure,
	"discharge refrig temp":              readings.DischargeTemperature,
	"condenser entering refrig pressure": readings.CondenserInletPressure,
	"condenser entering refrig temp":     readings.CondenserInletTemperature,
	"condenser leaving refrig pressure":  readings.LiquidPressure,
	"condenser leaving refrig temp":      readings.LiquidTemperature,
	"liquid refrig pressure":             readings.LiquidPressure,
	"liquid refrig temp":                 readings.LiquidTemperature,
	"evaporator leaving refrig pressure": readings.EvaporatorOutletPressure,
	"evaporator leaving refrig temp":     readings.EvaporatorOutletTemperature,
	"refrig flow":                        readings.MassFlow,
	"compressor elec power":              readings.CompressorPower,
	"compressor elec active power":       readings.CompressorPower,
	"compressor speed":                   readings.Speed,
	"compressor freq":                    readings.Speed,
	"condenser entering water temp":      readings.SinkInletTemperature,
	"condenser leaving water temp":       readings.SinkOutletTemperature,
	"condenser water delta temp":         readings.SinkTemperatureChange,
	"condenser water flow":               readings.SinkVolumeFlow,
	"hot water entering temp":            readings.SinkInletTemperature,
	"hot water leaving temp":             readings.SinkOutletTemperature,
	"hot water delta temp":               readings.SinkTemperatureChange,
	"hot water flow":                     readings.SinkVolumeFlow,
	"chilled water entering temp":        readings.SourceInletTemperature,
	"chilled water leaving temp":         readings.SourceOutletTemperature,
	"chilled water delta temp":           readings.SourceTemperatureChange,
	"chilled water flow":                 readings.SourceVolumeFlow,
	"evaporator entering water temp":     readings.SourceInletTemperature,
	"evaporator leaving water temp":      readings.SourceOutletTemperature,
	"evaporator water flow":              readings.SourceVolumeFlow,
	"outside air temp":                   readings.SourceInletTemperature,
	"outside air humidity":               readings.SourceInletHumidity,
	"evaporator entering air temp":       readings.SourceInletTemperature,
	"evaporator leaving air temp":        readings.SourceOutletTemperature,
	"evaporator entering air humidity":   readings.SourceInletHumidity,
	"evaporator leaving air humidity":    readings.SourceOutletHumidity,
	"evaporator air flow":                readings.SourceVolumeFlow,
	"condenser entering air temp":        readings.SinkInletTemperature,
	"condenser leaving air temp":         readings.SinkOutletTemperature,
	"condenser air flow":                 readings.SinkVolumeFlow,
})

// haystackTable keys points by their tags in alphabetical order.
func haystackTable(points map[string]readings.Reading) map[string]readings.Reading {
	table := make(map[string]readings.Reading, len(points))
	for tags, r := range points {
		table[tagKey(tags)] = r
	}
	return table
}

// tagKey brings tags in order and leaves out those that every sensor has.
func tagKey(tags string) string {
	list := strings.FieldsFunc(tags, func(r rune) bool { return r == ' ' || r == '-' || r == '_' || r == ',' })
	list = slices.DeleteFunc(list, func(tag string) bool { return tag == "sensor" || tag == "point" })
	slices.Sort(list)
	return strings.Join(list, " ")
}

func haystackReading(name string) (readings.Reading, bool) {
	if r, ok := haystackPoints[tagKey(name)]; ok {
		return r, ok
	}
	return readings.ParseReading(name)
}

// pointValues holds the members of an object of numbers in their order.
type pointValues struct {
	names  []string
	values []float64
}

// decode reads an object whose members are numbers; null stands for an absent one.
func (p *pointValues) decode(d *decoder, t token) error {
	if t.kind != '{' {
		return d.mismatch(t, "an object of points and their values")
	}
	return d.list('}', func() error {
		raw, err := d.name()
		if err != nil {
			return err
		}
		name := string(raw)
		d.path[len(d.path)-1].name = name
		if slices.Contains(p.names, name) {
			return d.refuse("duplicate_member", "the member comes twice in its object; once is allowed")
		}
		inner, err := d.next()
		if err != nil || inner.kind == 'n' {
			return err
		}
		var x float64
		err = d.assign(reflect.ValueOf(&x).Elem(), inner)
		p.names, p.values = append(p.names, name), append(p.values, x)
		return err
	})
}
