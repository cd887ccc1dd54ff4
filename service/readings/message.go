package readings

import (
	"fmt"

	"dewmark/service/cycle"
)

// Message is a sentence whose numbers are kept apart, so that the edge of the program can print them in its caller's units.
type Message struct {
	text    string // with one %s a number
	numbers []cycle.Number
}

func message(text string, numbers ...cycle.Number) Message { return Message{text, numbers} }

// String returns the sentence with its numbers in SI units.
func (m Message) String() string { return m.Render(cycle.Number.String) }

// Render returns the sentence with each number as write puts it.
func (m Message) Render(write func(cycle.Number) string) string {
	if len(m.numbers) == 0 {
		return m.text
	}
	words := make([]any, len(m.numbers))
	for i, n := range m.numbers {
		words[i] = write(n)
	}
	return fmt.Sprintf(m.text, words...)
}

// Numbers returns the numbers of the sentence in their order.
func (m Message) Numbers() []cycle.Number { return append([]cycle.Number(nil), m.numbers...) }

func temperature(v float64) cycle.Number { return cycle.Number{Quantity: cycle.Temperature, Value: v} }
func pressure(v float64) cycle.Number    { return cycle.Number{Quantity: cycle.Pressure, Value: v} }
func heat(v float64) cycle.Number        { return cycle.Number{Quantity: cycle.HeatFlow, Value: v} }
func plain(v float64) cycle.Number       { return cycle.Number{Quantity: cycle.Dimensionless, Value: v} }

func difference(v float64) cycle.Number {
	return cycle.Number{Quantity: cycle.TemperatureDifference, Value: v}
}
