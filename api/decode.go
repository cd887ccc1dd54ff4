package api

import (
	"bytes"
	"encoding/json"
	"fmt"
	"reflect"
	"strconv"
	"strings"
	"unicode/utf8"
)

const (
	maxDepth  = 12 // levels of nesting; the deepest request has 5
	maxFaults = 20 // defects told at once
	maxQuote  = 40 // bytes of the client's own text that a message repeats
)

// decodeJSON reads the one JSON value in body into the struct that v points to. It is stricter than [json.Unmarshal]: names
// match in case, none may be unknown or come twice, and numbers must be finite. Null stands for an absent member. It
// returns a [*Problem] with a pointer for every defect, which names no Go type. A field may be a struct, pointer, slice,
// map of strings, string, bool, float64 or a [selfDecoder]; others panic.
//
// What is JSON and what is not is for the standard library to say. The walk along the fields of the struct finds the rest,
// and the place where a text stops being JSON.
func decodeJSON(body []byte, v any) error {
	if !utf8.Valid(body) {
		return malformed("#", "the body is not UTF-8 text")
	}
	d := decoder{body: body, valid: json.Valid(body)}
	d.path = d.room[:0]
	err := d.value(reflect.ValueOf(v).Elem())
	switch {
	case err != nil:
		return err
	case d.peek() != 0 || d.at < len(body):
		return malformed("#", "something follows the JSON value"+d.position())
	case !d.valid:
		return malformed("#", "the body is not JSON")
	}
	return invalid(d.faults)
}

// decoder walks over JSON text.
type decoder struct {
	body   []byte
	valid  bool   // the text is JSON
	at     int    // in body
	path   []step // to the value being read
	inside int    // levels below path, in a value that is read over
	faults []MemberError
	room   [8]step // what path begins with
}

// step is one part of a JSON pointer: a member's name, or the index of an element of an array.
type step struct {
	name  string
	index int
	array bool
}

// token is the start of a value, all of it unless the value is an object or an array.
type token struct {
	kind byte   // {, [, ", t for true, f, n, or 0 for a number
	text []byte // as it stands in the body, quotes included
}

// selfDecoder is a struct, map or slice that comes in forms of its own.
type selfDecoder interface {
	// decode reads the value that starts with t, as [decoder.assign] does.
	decode(d *decoder, t token) error
}

// value reads the next value into target. It notes a defect of the value and goes on; an error ends the reading.
func (d *decoder) value(target reflect.Value) error {
	t, err := d.next()
	if err != nil {
		return err
	}
	return d.assign(target, t)
}

// assign stores the value that starts with t.
func (d *decoder) assign(target reflect.Value, t token) error {
	switch target.Kind() {
	case reflect.Struct, reflect.Map, reflect.Slice:
		if own, ok := reflect.TypeAssert[selfDecoder](target.Addr()); ok {
			return own.decode(d, t)
		}
	default: // has one form
	}
	switch target.Kind() {
	case reflect.Pointer:
		target.Set(reflect.New(target.Type().Elem()))
		return d.assign(target.Elem(), t)
	case reflect.Struct:
		if t.kind != '{' {
			return d.mismatch(t, "an object")
		}
		return d.object(target)
	case reflect.Map:
		if t.kind != '{' {
			return d.mismatch(t, "an object")
		}
		return d.texts(target)
	case reflect.Slice:
		if t.kind != '[' {
			return d.mismatch(t, "an array")
		}
		return d.array(target)
	case reflect.String:
		if t.kind != '"' {
			return d.mismatch(t, "a string")
		}
		text, err := d.unquote(t)
		target.SetString(string(text))
		return err
	case reflect.Bool:
		if t.kind != 't' && t.kind != 'f' {
			return d.mismatch(t, "true or false")
		}
		target.SetBool(t.kind == 't')
	case reflect.Float64:
		if t.kind != 0 {
			return d.mismatch(t, "a number")
		}
		x, err := strconv.ParseFloat(string(t.text), 64)
		if err != nil { // beyond the largest float64: the token is a number
			return d.fault("out_of_range", shorten(string(t.text))+" is too large; numbers must lie within 1.7e308 either way")
		}
		target.SetFloat(x)
	default:
		panic("api: no JSON for " + target.Type().String())
	}
	return nil
}

// object reads members up to the closing brace.
func (d *decoder) object(target reflect.Value) error {
	shape := shapeOf(target.Type())
	var seen uint64
	return d.list('}', func() error {
		raw, err := d.name()
		if err != nil {
			return err
		}
		i, known := shape.index[string(raw)]
		if !known {
			name := string(raw)
			d.path[len(d.path)-1].name = name
			return d.refuse("unknown_member", "there is no member "+quote(name)+" here; "+shape.hint(name))
		}
		d.path[len(d.path)-1].name = shape.names[i]
		if seen&(1<<i) != 0 {
			return d.refuse("duplicate_member", "the member comes twice in its object; once is allowed")
		}
		seen |= 1 << i
		t, err := d.next()
		if err != nil || t.kind == 'n' {
			return err
		}
		return d.assign(target.FieldByIndex(shape.fields[i]), t)
	})
}

// texts reads members with string values into a map.
func (d *decoder) texts(target reflect.Value) error {
	into := map[string]string{}
	target.Set(reflect.ValueOf(into))
	return d.list('}', func() error {
		raw, err := d.name()
		if err != nil {
			return err
		}
		name := string(raw)
		d.path[len(d.path)-1].name = name
		if _, twice := into[name]; twice {
			return d.refuse("duplicate_member", "the member comes twice in its object; once is allowed")
		}
		var text string
		err = d.value(reflect.ValueOf(&text).Elem())
		into[name] = text
		return err
	})
}

// array reads elements up to the closing bracket.
func (d *decoder) array(target reflect.Value) error {
	target.Set(reflect.MakeSlice(target.Type(), 0, 1))
	n := 0
	return d.list(']', func() error {
		d.path[len(d.path)-1] = step{index: n, array: true}
		if n == target.Cap() {
			target.Grow(1)
		}
		n++
		target.SetLen(n)
		return d.value(target.Index(n - 1))
	})
}

// list calls read for every member or element up to the closing mark. The last step of the path is read's to set.
func (d *decoder) list(closing byte, read func() error) error {
	if d.peek() == closing {
		d.at++
		return nil
	}
	d.path = append(d.path, step{})
	for {
		if err := read(); err != nil {
			return err
		}
		c := d.peek()
		if c != ',' && c != closing {
			d.path = d.path[:len(d.path)-1]
			return d.syntax()
		}
		d.at++
		if c == closing {
			d.path = d.path[:len(d.path)-1]
			return nil
		}
	}
}

// name reads the name of a member and the colon after it.
func (d *decoder) name() ([]byte, error) {
	before := d.path
	d.path = d.path[:len(d.path)-1] // a bad name is a defect of the object
	if d.peek() != '"' {
		return nil, d.syntax()
	}
	t, err := d.next()
	if err != nil {
		return nil, err
	}
	name, err := d.unquote(t)
	if err != nil {
		return nil, err
	}
	if d.peek() != ':' {
		return nil, d.syntax()
	}
	d.at++
	d.path = before
	return name, nil
}

// peek returns the next byte that is no white space, or 0 at the end.
func (d *decoder) peek() byte {
	for d.at < len(d.body) {
		switch c := d.body[d.at]; c {
		case ' ', '\t', '\r', '\n':
			d.at++
		default:
			return c
		}
	}
	return 0
}

// next returns the next token, or a problem where there is none or the text nests too deep.
func (d *decoder) next() (token, error) {
	c := d.peek()
	start := d.at
	switch c {
	case '{', '[':
		if len(d.path)+d.inside >= maxDepth {
			return token{}, malformed(d.pointer(), fmt.Sprintf("the body nests deeper than %d levels", maxDepth))
		}
		d.at++
		return token{kind: c}, nil
	case '"':
		for d.at++; d.at < len(d.body); d.at++ {
			switch d.body[d.at] {
			case '\\':
				d.at++
			case '"':
				d.at++
				return d.scalar(c, start)
			}
		}
		d.at = len(d.body)
	case 't', 'f', 'n':
		for _, word := range []string{"true", "false", "null"} {
			if bytes.HasPrefix(d.body[d.at:], []byte(word)) {
				d.at += len(word)
				return token{c, d.body[d.at-len(word) : d.at]}, nil
			}
		}
	case '-', '0', '1', '2', '3', '4', '5', '6', '7', '8', '9':
		for d.at < len(d.body) && strings.IndexByte("+-.0123456789eE", d.body[d.at]) >= 0 {
			d.at++
		}
		return d.scalar(0, start)
	}
	return token{}, d.syntax()
}

// scalar returns the string or number that began at start.
func (d *decoder) scalar(kind byte, start int) (token, error) {
	text := d.body[start:d.at]
	if !d.valid && !json.Valid(text) {
		d.at = start
		return token{}, d.syntax()
	}
	return token{kind, text}, nil
}

// unquote returns the text of a string.
func (d *decoder) unquote(t token) ([]byte, error) {
	if bytes.IndexByte(t.text, '\\') < 0 {
		return t.text[1 : len(t.text)-1], nil
	}
	var text string
	if json.Unmarshal(t.text, &text) != nil {
		return nil, d.syntax()
	}
	return []byte(text), nil
}

// fault notes a defect. It returns a problem once there are too many.
func (d *decoder) fault(code, detail string) error {
	d.faults = append(d.faults, MemberError{Pointer: d.pointer(), Code: code, Detail: detail})
	if len(d.faults) >= maxFaults {
		return invalid(d.faults)
	}
	return nil
}

// refuse notes a defect of the member that comes next and reads over it.
func (d *decoder) refuse(code, detail string) error {
	if err := d.fault(code, detail); err != nil {
		return err
	}
	t, err := d.next()
	if err != nil {
		return err
	}
	return d.skip(t)
}

// mismatch notes a value of the wrong kind and reads over it.
func (d *decoder) mismatch(t token, want string) error {
	if err := d.fault("wrong_type", "must be "+want+", not "+describe(t)); err != nil {
		return err
	}
	return d.skip(t)
}

// skip reads over the rest of a value that starts with t.
func (d *decoder) skip(t token) error {
	if t.kind != '{' && t.kind != '[' {
		return nil
	}
	d.inside++
	for {
		switch d.peek() {
		case '}', ']':
			d.at++
			d.inside--
			return nil
		case ',', ':': // where they belong, the library has seen to
			d.at++
		default:
			inner, err := d.next()
			if err != nil {
				return err
			}
			if err := d.skip(inner); err != nil {
				return err
			}
		}
	}
}

// describe says what a value is that starts with t.
func describe(t token) string {
	switch t.kind {
	case '{':
		return "an object"
	case '[':
		return "an array"
	case '"':
		return "the string " + shorten(string(t.text))
	case 0:
		return "the number " + shorten(string(t.text))
	}
	return string(t.text)
}

// syntax explains why no token could be read.
func (d *decoder) syntax() error {
	d.peek()
	rest := d.body[d.at:]
	switch {
	case len(bytes.TrimSpace(d.body)) == 0:
		return malformed("#", "the body is empty; a JSON object is required")
	case len(rest) == 0:
		return malformed(d.pointer(), "the JSON text ends too early")
	}
	for _, word := range []string{"NaN", "nan", "Infinity", "-Infinity", "inf", "-inf", "-NaN"} {
		if bytes.HasPrefix(rest, []byte(word)) {
			return malformed(d.pointer(), word+" is not a JSON number; numbers must be finite")
		}
	}
	return malformed(d.pointer(), "the body is not JSON"+d.position())
}

// position says where the reading stands.
func (d *decoder) position() string {
	done, rest := d.body[:d.at], d.body[d.at:]
	line := 1 + bytes.Count(done, []byte{'\n'})
	column := d.at - bytes.LastIndexByte(done, '\n')
	near := strings.ToValidUTF8(string(rest[:min(len(rest), maxQuote/2)]), "")
	return fmt.Sprintf(" (line %d, byte %d, at %s)", line, column, strconv.QuoteToASCII(near))
}

// pointer returns the path as a JSON pointer (RFC 6901) in its form of a URI fragment.
func (d *decoder) pointer() string {
	b := []byte{'#'}
	for _, s := range d.path {
		b = append(b, '/')
		if s.array {
			b = strconv.AppendInt(b, int64(s.index), 10)
		} else {
			b = append(b, escapePointer(s.name)...)
		}
	}
	return string(b)
}

// shorten cuts the client's text to what a message can bear.
func shorten(text string) string {
	if len(text) <= maxQuote {
		return text
	}
	return strings.ToValidUTF8(text[:maxQuote], "") + "…"
}

func quote(text string) string { return strconv.Quote(shorten(text)) }
