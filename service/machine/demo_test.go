package machine

import (
	"bytes"
	"encoding/json"
	"os"
	"testing"

	"dewmark/service/cycle"
)

// demo reads a machine of the demonstration, in the units of the wire's SI system: °C, kPa, kW, m3/h, W/K.
func demo(t testing.TB, name string) *Machine {
	t.Helper()
	b, err := os.ReadFile("../../testdata/machines/" + name + ".json")
	if err != nil {
		t.Fatal(err)
	}
	var f demoFile
	dec := json.NewDecoder(bytes.NewReader(b))
	dec.DisallowUnknownFields()
	if err := dec.Decode(&f); err != nil {
		t.Fatal(err)
	}
	return f.machine(t)
}

type demoFile struct {
	Name        string
	Refrigerant string
	Layout      string
	Purpose     string
	GasCooler   *struct{ Pressure float64 } `json:"gas_cooler"`
	Compressor  struct {
		Maps                 []demoMap
		SweptVolume          *float64  `json:"swept_volume"`
		IsentropicEfficiency []float64 `json:"isentropic_efficiency"`
		VolumetricEfficiency []float64 `json:"volumetric_efficiency"`
		HeatLossFraction     *float64  `json:"heat_loss_fraction"`
		DriveEfficiency      *float64  `json:"drive_efficiency"`
		Speed                *float64
		SpeedMin             *float64 `json:"speed_min"`
		SpeedMax             *float64 `json:"speed_max"`
		Envelopes            []struct {
			Vertices     [][2]float64
			PressureAxis bool `json:"pressure_axis"`
			Source       string
		}
	}
	Evaporator, Condenser demoExchanger
	Superheat, Subcooling *float64
	Limits                struct {
		DischargeTemperature *float64 `json:"discharge_temperature"`
		PressureRatioMax     *float64 `json:"pressure_ratio_max"`
		HighPressure         *float64 `json:"high_pressure"`
	}
	Auxiliaries struct {
		Source, Sink demoAuxiliary
		Control      *float64
	}
}

type demoMap struct {
	Kind             string
	Speed            *float64
	MassFlow         []float64 `json:"mass_flow"`
	Power            []float64
	Units            map[string]string
	SuctionSuperheat *float64 `json:"suction_superheat"`
	Envelope         [][2]float64
}

type demoExchanger struct {
	UA               *float64
	Arrangement      string
	SuperheatRatio   *float64 `json:"superheat_ratio"`
	DesuperheatRatio *float64 `json:"desuperheat_ratio"`
	SubcoolingRatio  *float64 `json:"subcooling_ratio"`
	SecondaryShare   *float64 `json:"secondary_share"`
}

type demoAuxiliary struct {
	Power         *float64
	PressureRise  *float64 `json:"pressure_rise"`
	Efficiency    *float64
	ReferenceFlow *float64 `json:"reference_flow"`
	HeatToStream  *float64 `json:"heat_to_stream"`
}

func times(p *float64, by float64) *float64 {
	if p == nil {
		return nil
	}
	return new(*p * by)
}

func fromCelsius(p *float64) *float64 {
	if p == nil {
		return nil
	}
	return new(*p + zeroCelsius)
}

func (a demoAuxiliary) si() Auxiliary {
	return Auxiliary{
		Power: times(a.Power, 1e3), PressureRise: times(a.PressureRise, 1e3), Efficiency: a.Efficiency,
		ReferenceFlow: times(a.ReferenceFlow, 1.0/3600), HeatToStream: a.HeatToStream,
	}
}

func (e demoExchanger) si(t testing.TB) Exchanger {
	a, ok := ParseArrangement(e.Arrangement)
	if !ok {
		t.Fatalf("arrangement %q", e.Arrangement)
	}
	return Exchanger{
		UA: e.UA, Arrangement: a, SuperheatRatio: e.SuperheatRatio, DesuperheatRatio: e.DesuperheatRatio,
		SubcoolingRatio: e.SubcoolingRatio, SecondaryShare: e.SecondaryShare,
	}
}

func vertices(corners [][2]float64, pressureAxis bool) (out []Vertex) {
	for _, c := range corners {
		v := Vertex{c[0] + zeroCelsius, c[1] + zeroCelsius}
		if pressureAxis {
			v.Condensation = c[1] * 1e3
		}
		out = append(out, v)
	}
	return out
}

func (f *demoFile) machine(t testing.TB) *Machine {
	layout, ok := cycle.ParseLayout(f.Layout)
	if !ok {
		t.Fatalf("layout %q", f.Layout)
	}
	purpose, ok := cycle.ParsePurpose(f.Purpose)
	if !ok {
		t.Fatalf("purpose %q", f.Purpose)
	}
	m := &Machine{
		Name: f.Name, Refrigerant: refrigerant(t, f.Refrigerant), Layout: layout, Purpose: purpose,
		Evaporator: f.Evaporator.si(t), Condenser: f.Condenser.si(t), Superheat: f.Superheat, Subcooling: f.Subcooling,
		Limits: Limits{
			DischargeTemperature: fromCelsius(f.Limits.DischargeTemperature), PressureRatioMax: f.Limits.PressureRatioMax,
			HighPressure: times(f.Limits.HighPressure, 1e3),
		},
		Auxiliaries: Auxiliaries{Source: f.Auxiliaries.Source.si(), Sink: f.Auxiliaries.Sink.si(), Control: times(f.Auxiliaries.Control, 1e3)},
	}
	if f.GasCooler != nil {
		m.GasCooler = &HighSide{Pressure: new(f.GasCooler.Pressure * 1e3)}
	}
	k := &f.Compressor
	m.Compressor = Compressor{
		SweptVolume: k.SweptVolume, HeatLossFraction: k.HeatLossFraction, DriveEfficiency: k.DriveEfficiency,
		Speed: k.Speed, SpeedMin: k.SpeedMin, SpeedMax: k.SpeedMax,
	}
	if k.IsentropicEfficiency != nil {
		m.Compressor.IsentropicEfficiency = &Law{Coefficients: k.IsentropicEfficiency}
		m.Compressor.VolumetricEfficiency = &Law{Coefficients: k.VolumetricEfficiency}
	}
	for _, e := range k.Envelopes {
		m.Compressor.Envelopes = append(m.Compressor.Envelopes, Envelope{Vertices: vertices(e.Vertices, e.PressureAxis), PressureAxis: e.PressureAxis, Source: e.Source})
	}
	for _, x := range k.Maps {
		if x.Units["mass_flow"] != "kg/h" || x.Units["power"] != "W" || x.Units["temperature"] != "Cel" {
			t.Fatalf("units %v", x.Units)
		}
		m.Compressor.Maps = append(m.Compressor.Maps, Map{
			MassFlow: x.MassFlow, Power: x.Power, Units: MapUnits{MassFlow: 1.0 / 3600}, Speed: x.Speed,
			SuctionSuperheat: x.SuctionSuperheat, Envelope: vertices(x.Envelope, false),
		})
	}
	return m
}
