package readings

import (
	_ "embed"
	"encoding/csv"
	"fmt"
	"slices"
	"strings"
	"sync"
)

// signaturesCSV holds the signs of faults in the residuals, measured less expected at the same source, sink and speed. A
// sign that the tables give with a remark stands without it: superheat near zero and discharge too low as "-", apparent
// subcooling as "+", superheat that rises only when the valve is wide open as "0 or +".
//
//go:embed signatures.csv
var signaturesCSV string

// The tables of signs.
const (
	// orificeScheme is the rule table of Rossi and Braun, HVAC&R Research 3(1):19 (1997), for a rooftop unit with a fixed
	// orifice; its fouling of an exchanger is a reduced flow of air.
	orificeScheme = "rossi_braun_1997_fixed_orifice"
	// practiceScheme is common practice for machines whose valve holds the superheat.
	practiceScheme = "trade_practice"
)

var schemeSources = map[string]string{
	orificeScheme:  "Rossi and Braun 1997, fixed orifice",
	practiceScheme: "common practice",
}

// signature is what a fault does to the features.
type signature struct {
	fault string
	signs [FeatureCount]Sign // 0: nothing is said
}

// signatures returns the faults of each scheme in their order. The file is embedded and a test reads it, so that a failure
// can only mean a damaged file.
var signatures = sync.OnceValue(func() map[string][]signature {
	out, err := readSignatures(signaturesCSV)
	if err != nil {
		panic("readings: " + err.Error())
	}
	return out
})

func readSignatures(text string) (map[string][]signature, error) {
	rows, err := csv.NewReader(strings.NewReader(text)).ReadAll()
	if err != nil {
		return nil, err
	}
	out := map[string][]signature{}
	for _, row := range rows[1:] {
		scheme, fault := row[0], row[1]
		feature := slices.IndexFunc(featureTable[:], func(f featureRow) bool { return f.name == row[2] })
		sign := slices.Index(signNames[1:], row[3])
		if feature < 0 || sign < 0 {
			return nil, fmt.Errorf("signatures: no feature %q or no sign %q", row[2], row[3])
		}
		list := out[scheme]
		i := slices.IndexFunc(list, func(s signature) bool { return s.fault == fault })
		if i < 0 {
			i = len(list)
			list = append(list, signature{fault: fault})
		}
		list[i].signs[feature] = Sign(sign + 1)
		out[scheme] = list
	}
	holdSuperheat(out[practiceScheme])
	return out, nil
}

// uncontrolled are the faults in which the valve does not control: its own, and that of liquid which gets past it.
var uncontrolled = []string{"expansion_device_too_open", "liquid_floodback"}

// holdSuperheat softens the signs of the superheat: a valve that works holds it until it is wide open or closed.
func holdSuperheat(list []signature) {
	for i := range list {
		sign := &list[i].signs[FeatureSuperheat]
		switch {
		case slices.Contains(uncontrolled, list[i].fault):
		case *sign == Rises:
			*sign = StaysOrRise
		case *sign == Falls:
			*sign = StaysOrFall
		}
	}
}

// Faults returns the faults whose signs are known for an expansion device.
func Faults(e Expansion) []string {
	var names []string
	for _, s := range signatures()[schemeOf(e)] {
		names = append(names, s.fault)
	}
	return names
}

func schemeOf(e Expansion) string {
	if e == FixedOrifice {
		return orificeScheme
	}
	return practiceScheme
}
