package api

import (
	"bytes"
	"cmp"
	"encoding/json"
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"
)

// object writes a JSON object member by member. It serves states, which are too many for reflection.
type object struct {
	b      []byte
	absent string // the first member written by figure that is no number, or ""
}

// begin opens an object at the end of b.
func begin(b []byte) object { return object{b: append(b, '{')} }

// end closes the object and returns the text.
func (o *object) end() []byte { return append(o.b, '}') }

// name writes the name of the next member.
func (o *object) name(name string) {
	if o.b[len(o.b)-1] != '{' {
		o.b = append(o.b, ',')
	}
	o.b = append(o.b, '"')
	o.b = append(o.b, name...) // our own names need no escapes
	o.b = append(o.b, '"', ':')
}

// number writes a number, or null when it is not finite.
func (o *object) number(name string, x float64) {
	o.name(name)
	o.b = appendNumber(o.b, x)
}

// figure writes a number that every answer has. One that is not finite is a fault, which err tells.
func (o *object) figure(name string, x float64) {
	if o.absent == "" && (math.IsNaN(x) || math.IsInf(x, 0)) {
		o.absent = name
	}
	o.number(name, x)
}

// err returns an error where a figure was missing.
func (o *object) err() error {
	if o.absent != "" {
		return fmt.Errorf("api: %s is not a number", o.absent)
	}
	return nil
}

// inner writes an object.
func (o *object) inner(name string, write func(item *object)) {
	o.name(name)
	o.item(write)
}

// item writes an object at the end.
func (o *object) item(write func(item *object)) {
	item := begin(o.b)
	write(&item)
	o.b, o.absent = item.end(), cmp.Or(o.absent, item.absent)
}

// list writes an array of n objects.
func (o *object) list(name string, n int, write func(i int, item *object)) {
	o.name(name)
	o.b = append(o.b, '[')
	for i := range n {
		if i > 0 {
			o.b = append(o.b, ',')
		}
		o.item(func(item *object) { write(i, item) })
	}
	o.b = append(o.b, ']')
}

// flag writes true or false.
func (o *object) flag(name string, yes bool) {
	o.name(name)
	o.b = strconv.AppendBool(o.b, yes)
}

func (o *object) text(name, text string) {
	o.name(name)
	o.b = appendText(o.b, text)
}

// texts writes an array of texts.
func (o *object) texts(name string, list []string) {
	o.name(name)
	o.b = append(o.b, '[')
	for i, text := range list {
		if i > 0 {
			o.b = append(o.b, ',')
		}
		o.b = appendText(o.b, text)
	}
	o.b = append(o.b, ']')
}

// value writes any value that [encoding/json] can.
func (o *object) value(name string, v any) error {
	o.name(name)
	var err error
	o.b, err = appendValue(o.b, v)
	return err
}

// members writes all members of the struct v.
func (o *object) members(v any) error {
	start := len(o.b)
	b, err := appendValue(o.b, v)
	if err != nil {
		return err
	}
	text := b[start : len(b)-1] // without the closing brace
	switch {
	case len(text) == 1:
		o.b = b[:start]
	case b[start-1] == '{':
		o.b = b[:start+copy(b[start:], text[1:])]
	default:
		text[0] = ','
		o.b = b[:len(b)-1]
	}
	return nil
}

// appendValue writes v as [encoding/json] does, characters that only HTML minds left alone.
func appendValue(b []byte, v any) ([]byte, error) {
	out := bytes.NewBuffer(b)
	enc := json.NewEncoder(out)
	enc.SetEscapeHTML(false)
	err := enc.Encode(v)
	return bytes.TrimSuffix(out.Bytes(), []byte{'\n'}), err
}

// appendNumber writes x in the shortest form that reads back as x, laid out as [json.Marshal] does.
func appendNumber(b []byte, x float64) []byte {
	size := math.Abs(x)
	switch {
	case math.IsNaN(x) || math.IsInf(x, 0):
		return append(b, "null"...)
	case x != 0 && (size < 1e-6 || size >= 1e21):
		b = strconv.AppendFloat(b, x, 'e', -1, 64)
		if n := len(b); b[n-4] == 'e' && b[n-3] == '-' && b[n-2] == '0' { // e-09 is e-9
			b = append(b[:n-2], b[n-1])
		}
		return b
	}
	return strconv.AppendFloat(b, x, 'f', -1, 64)
}

// appendText writes a JSON string.
func appendText(b []byte, text string) []byte {
	marks, wide := 0, false
	for i := range len(text) {
		switch c := text[i]; {
		case c < ' ':
			return appendEscaped(b, text)
		case c == '"' || c == '\\':
			marks++
		case c >= utf8.RuneSelf:
			wide = true
		}
	}
	if wide && (!utf8.ValidString(text) || strings.ContainsAny(text, "\u2028\u2029")) {
		return appendEscaped(b, text)
	}
	b = append(b, '"')
	for ; marks > 0; marks-- {
		i := strings.IndexAny(text, `"\`)
		b = append(b, text[:i]...)
		b = append(b, '\\', text[i])
		text = text[i+1:]
	}
	b = append(b, text...)
	return append(b, '"')
}

// appendEscaped is appendText for text that needs more than backslashes.
func appendEscaped(b []byte, text string) []byte {
	b, _ = appendValue(b, text) // a string cannot fail
	return b
}

// known returns a pointer to x for a member that is null when x is not a number.
func known(x float64) *float64 {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return nil
	}
	return &x
}
