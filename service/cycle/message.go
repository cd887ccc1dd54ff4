package cycle

import (
	"fmt"
	"strconv"
)

// Quantity is a kind of quantity. It tells whoever prints a number how to convert its unit.
type Quantity uint8

// The quantities of numbers in messages, with their SI units.
const (
	Dimensionless         Quantity = iota
	Temperature                    // K
	TemperatureDifference          // K
	Pressure                       // Pa, absolute
	PressureDifference             // Pa
	Power                          // W, mechanical or electrical
	HeatFlow                       // W
	MassFlow                       // kg/s
	VolumeFlow                     // m3/s
	Volume                         // m3
	EntropyFlow                    // W/K
	Enthalpy                       // J/kg
)

var quantityUnits = [...]string{"", " K", " K", " Pa", " Pa", " W", " W", " kg/s", " m3/s", " m3", " W/K", " J/kg"}

// Number is a value in SI units that a message speaks of.
type Number struct {
	Quantity Quantity
	Value    float64
}

func (n Number) String() string {
	return strconv.FormatFloat(n.Value, 'g', 6, 64) + quantityUnits[n.Quantity]
}

// messageNumbers is the most numbers that one message speaks of.
const messageNumbers = 3

// Message is a sentence whose numbers are kept apart, so that the edge of the program can print them in its caller's
// units.
type Message struct {
	text    string // with one %s a number
	numbers [messageNumbers]Number
	count   int
}

func message(text string, numbers ...Number) Message {
	m := Message{text: text}
	m.count = copy(m.numbers[:], numbers)
	return m
}

// String returns the sentence with its numbers in SI units.
func (m Message) String() string { return m.Render(Number.String) }

// Render returns the sentence with each number as write puts it.
func (m Message) Render(write func(Number) string) string {
	if m.count == 0 {
		return m.text
	}
	words := make([]any, m.count)
	for i := range words {
		words[i] = write(m.numbers[i])
	}
	return fmt.Sprintf(m.text, words...)
}

// Numbers returns the numbers of the sentence in their order.
func (m Message) Numbers() []Number { return append([]Number(nil), m.numbers[:m.count]...) }

func temperature(v float64) Number { return Number{Temperature, v} }
func difference(v float64) Number  { return Number{TemperatureDifference, v} }
func pressure(v float64) Number    { return Number{Pressure, v} }
func plain(v float64) Number       { return Number{Dimensionless, v} }
