package naming_test

import (
	"errors"
	"slices"
	"testing"

	"dewmark/service/readings"
	"dewmark/service/readings/naming"
)

func TestNames(t *testing.T) {
	for _, row := range []struct {
		standard naming.Standard
		name     string
		want     readings.Reading
	}{
		{naming.Haystack, "discharge refrig pressure sensor point", readings.DischargePressure},
		{naming.Haystack, "hot-water leaving temp sensor", readings.SinkOutletTemperature},
		{naming.Haystack, "hotWaterLeavingTemp", readings.SinkOutletTemperature},
		{naming.Haystack, "sensor leaving chilled water temp point", readings.SourceOutletTemperature},
		{naming.Haystack, "compressor elec power sensor", readings.CompressorPower},
		{naming.Haystack, "outside air temp sensor", readings.AmbientTemperature},
		{naming.Brick, "Leaving_Hot_Water_Temperature_Sensor", readings.SinkOutletTemperature},
		{naming.Brick, "Entering_Condenser_Water_Temperature_Sensor", readings.SinkInletTemperature},
		{naming.Brick, "brick leaving", 0},
		{naming.Brick, "Compressor.Electric_Power_Sensor", readings.CompressorPower},
		{naming.Brick, "Chilled_Water_Supply_Flow_Sensor", readings.SourceVolumeFlow},
		{naming.Brick, "Outside_Air_Temperature_Sensor", readings.AmbientTemperature},
		{naming.Haystack, "discharge air temp sensor", 0}, // air, and nothing of the refrigerant
		{naming.Haystack, "condenser refrig temp sensor", 0},
		{naming.Haystack, "", 0},
		{0, "discharge refrig pressure", 0},
	} {
		got, err := row.standard.Reading(row.name)
		if got != row.want || (err != nil) != (row.want == 0) {
			t.Errorf("%s %q: %q, %v; want %q", row.standard, row.name, got, err, row.want)
		}
		if _, unknown := errors.AsType[*naming.UnknownPointError](err); err != nil && !unknown {
			t.Errorf("%s %q: %T", row.standard, row.name, err)
		}
	}
}

// An unknown name is answered with those that share its words.
func TestNearNames(t *testing.T) {
	_, err := naming.Haystack.Reading("hot water leaving pressure")
	e, ok := errors.AsType[*naming.UnknownPointError](err)
	if !ok || !slices.Contains(e.Near, "hot water leaving temp") {
		t.Errorf("%v", err)
	}
}

// Every point of the tables means its reading, and the core of what a machine needs is there in both standards.
func TestTables(t *testing.T) {
	for _, s := range []naming.Standard{naming.Haystack, naming.Brick} {
		have := map[readings.Reading]bool{}
		for _, p := range naming.Points(s) {
			got, err := s.Reading(p.Words + " sensor")
			if err != nil || got != p.Reading {
				t.Errorf("%s %q: %s, %v", s, p.Words, got, err)
			}
			have[p.Reading] = true
		}
		for _, r := range []readings.Reading{
			readings.SuctionPressure, readings.SuctionTemperature, readings.DischargePressure, readings.DischargeTemperature,
			readings.LiquidTemperature, readings.CompressorPower, readings.SinkInletTemperature, readings.SinkOutletTemperature,
			readings.SinkVolumeFlow, readings.SourceInletTemperature, readings.SourceOutletTemperature, readings.SourceVolumeFlow,
		} {
			if !have[r] {
				t.Errorf("%s has no point for %s", s, r)
			}
		}
		if name, ok := naming.ParseStandard(s.String()); !ok || name != s {
			t.Errorf("%s does not come back", s)
		}
	}
	if _, ok := naming.ParseStandard(""); ok {
		t.Error("the empty name is a standard")
	}
}

func FuzzReading(f *testing.F) {
	f.Add("Leaving_Hot_Water_Temperature_Sensor")
	f.Add("hotWaterLeavingTemp\x80é")
	f.Fuzz(func(t *testing.T, name string) {
		for _, s := range []naming.Standard{naming.Haystack, naming.Brick} {
			if r, err := s.Reading(name); err == nil && r.String() == "" {
				t.Errorf("%s %q means nothing", s, name)
			}
		}
	})
}
