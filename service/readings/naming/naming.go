// Package naming maps the point names of open tagging standards to readings, so that a building-management system sends
// what it has.
//
// Project Haystack describes a point by marker tags: "hot water leaving temp sensor" is a point with these markers. Brick
// describes it by a class, "Leaving_Hot_Water_Temperature_Sensor", and by the equipment that it is a point of, whose class
// may stand before it: "Compressor Electric_Power_Sensor". Either way a name is a set of words here: their order does not
// matter, nor upper and lower case, nor whether they are parted by blanks, hyphens, underscores, dots or capitals. The words
// "sensor" and "point" say nothing and may be left out.
//
// Points.csv lists the sets. Its words follow the definitions of Project Haystack 4 and the classes of Brick 1.3, both from
// memory. Neither standard has a word for every place in a refrigerant circuit; rows of origin "extension" take the
// trade's: suction, liquid, head pressure. The hot water and the condenser water of a machine are its sink, the chilled
// water its source; the outside air is its ambient. Supply and return are those of the plant, so that supply leaves the
// machine. A refrigerant pressure at a condenser is taken at its outlet, one at an evaporator likewise; a temperature "of"
// a condenser or an evaporator is a saturation temperature in many chillers and has no reading.
package naming

import (
	_ "embed"
	"encoding/csv"
	"fmt"
	"slices"
	"strings"
	"sync"
	"unicode"

	"dewmark/service/readings"
)

// Standard is a tagging standard.
type Standard uint8

// The standards.
const (
	Haystack Standard = iota + 1 // Project Haystack
	Brick
)

var standardNames = [...]string{"", "haystack", "brick"}

func (s Standard) String() string {
	if int(s) >= len(standardNames) {
		return ""
	}
	return standardNames[s]
}

// ParseStandard returns the standard with that name and reports whether there is one.
func ParseStandard(name string) (Standard, bool) {
	i := slices.Index(standardNames[:], name)
	return Standard(max(i, 0)), i > 0
}

// Point is one set of words and the reading that it means.
type Point struct {
	Words     string // in the order in which the standard usually has them, parted by blanks
	Reading   readings.Reading
	Extension bool // words of the trade that the standard does not define
}

//go:embed points.csv
var pointsCSV string

type table struct {
	points  []Point
	byWords map[string]readings.Reading
}

// tables reads the embedded file once. A test reads it too, so that a failure can only mean a damaged file.
var tables = sync.OnceValue(func() map[Standard]*table {
	t, err := read(pointsCSV)
	if err != nil {
		panic("naming: " + err.Error())
	}
	return t
})

func read(text string) (map[Standard]*table, error) {
	rows, err := csv.NewReader(strings.NewReader(text)).ReadAll()
	if err != nil {
		return nil, err
	}
	out := map[Standard]*table{}
	for _, row := range rows[1:] {
		s, ok := ParseStandard(row[0])
		r, known := readings.ParseReading(row[2])
		if !ok || !known || row[3] != "standard" && row[3] != "extension" {
			return nil, fmt.Errorf("row %v", row)
		}
		if out[s] == nil {
			out[s] = &table{byWords: map[string]readings.Reading{}}
		}
		key := keyOf(row[1])
		if _, taken := out[s].byWords[key]; taken {
			return nil, fmt.Errorf("%q stands twice", row[1])
		}
		out[s].byWords[key] = r
		out[s].points = append(out[s].points, Point{row[1], r, row[3] == "extension"})
	}
	return out, nil
}

// Points returns all points of a standard that mean a reading.
func Points(s Standard) []Point {
	t := tables()[s]
	if t == nil {
		return nil
	}
	return slices.Clone(t.points)
}

// UnknownPointError reports a name that means no reading.
type UnknownPointError struct {
	Standard Standard
	Name     string
	Near     []string // words of points that share most with it, the nearest first
}

func (e *UnknownPointError) Error() string {
	text := fmt.Sprintf("%q is no point of %s that means a reading", e.Name, e.Standard)
	if len(e.Near) > 0 {
		text += "; near are " + strings.Join(e.Near, ", ")
	}
	return text
}

// Reading returns the reading that a name means in the standard, or an [*UnknownPointError].
func (s Standard) Reading(name string) (readings.Reading, error) {
	t := tables()[s]
	if t == nil {
		return 0, &UnknownPointError{Standard: s, Name: name}
	}
	if r, ok := t.byWords[keyOf(name)]; ok {
		return r, nil
	}
	return 0, &UnknownPointError{s, name, t.near(name)}
}

// silent words say nothing about what is read.
var silent = []string{"sensor", "point", "his", "cur"}

// longestName bounds what is looked at, in bytes: no name has more.
const longestName = 200

// wordsOf parts a name into lower-case words, sorted, each once.
func wordsOf(name string) []string {
	var words []string
	var word strings.Builder
	end := func() {
		if word.Len() > 0 {
			words = append(words, word.String())
			word.Reset()
		}
	}
	before := rune(0)
	for _, r := range name[:min(len(name), longestName)] {
		switch {
		case !unicode.IsLetter(r) && !unicode.IsDigit(r):
			end()
		case unicode.IsUpper(r) && unicode.IsLower(before):
			end()
			word.WriteRune(unicode.ToLower(r))
		default:
			word.WriteRune(unicode.ToLower(r))
		}
		before = r
	}
	end()
	words = slices.DeleteFunc(words, func(w string) bool { return slices.Contains(silent, w) })
	slices.Sort(words)
	return slices.Compact(words)
}

func keyOf(name string) string { return strings.Join(wordsOf(name), " ") }

// near returns up to three points that share more than half of their words with a name.
func (t *table) near(name string) []string {
	have := wordsOf(name)
	type candidate struct {
		words  string
		common float64
	}
	var all []candidate
	for i := range t.points {
		words := wordsOf(t.points[i].Words)
		common := 0
		for _, w := range words {
			if slices.Contains(have, w) {
				common++
			}
		}
		if share := float64(common) / float64(len(words)+len(have)-common); share > 0.5 {
			all = append(all, candidate{t.points[i].Words, share})
		}
	}
	slices.SortStableFunc(all, func(a, b candidate) int {
		switch {
		case a.common > b.common:
			return -1
		case a.common < b.common:
			return 1
		}
		return 0
	})
	var out []string
	for _, c := range all[:min(3, len(all))] {
		out = append(out, c.words)
	}
	return out
}
