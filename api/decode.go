package api

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"reflect"
	"slices"
	"strconv"
	"strings"
	"sync"
	"unicode/utf8"
)

const (
	maxDepth  = 12 // levels of nesting; the deepest request has 5
	maxFaults = 20 // defects told at once
	maxQuote  = 40 // bytes of the client's own text that a message repeats
)

// decodeJSON reads the one JSON value in body into the struct that v points to, walking the tokens along the struct's
// fields. It is stricter than [json.Unmarshal]: names match in case, none may be unknown or come twice, and numbers must
// be finite. Null stands for an absent member. It returns a [*Problem] with a pointer for every defect, which names no Go
// type. A field may be a struct, pointer, slice, map of strings, string, bool or float64; others panic.
func decodeJSON(body []byte, v any) error {
	if !utf8.Valid(body) {
		return malformed("#", "the body is not UTF-8 text")
	}
	d := decoder{body: body, tokens: json.NewDecoder(bytes.NewReader(body))}
	d.tokens.UseNumber()
	if err := d.value(reflect.ValueOf(v).Elem()); err != nil {
		return err
	}
	if _, err := d.tokens.Token(); err != io.EOF { //nolint:errorlint // Token returns the bare io.EOF
		return malformed("#", "something follows the JSON value"+d.position())
	}
	return invalid(d.faults)
}

type decoder struct {
	body   []byte
	tokens *json.Decoder
	path   []step // to the value being read
	inside int    // levels below path, in a value that is read over
	faults []MemberError
}

// step is one part of a JSON pointer: a member's name, or an element's index where name is not set.
type step struct {
	name  string
	index int
	array bool
}

// value reads the next value into target. It notes a defect of the value and goes on; an error ends the reading.
func (d *decoder) value(target reflect.Value) error {
	token, err := d.next()
	if err != nil {
		return err
	}
	return d.assign(target, token)
}

// assign stores the value that starts with token.
func (d *decoder) assign(target reflect.Value, token json.Token) error {
	switch target.Kind() {
	case reflect.Pointer:
		target.Set(reflect.New(target.Type().Elem()))
		return d.assign(target.Elem(), token)
	case reflect.Struct:
		if token != json.Delim('{') {
			return d.mismatch(token, "an object")
		}
		return d.object(target)
	case reflect.Map:
		if token != json.Delim('{') {
			return d.mismatch(token, "an object")
		}
		return d.texts(target)
	case reflect.Slice:
		if token != json.Delim('[') {
			return d.mismatch(token, "an array")
		}
		return d.array(target)
	case reflect.String:
		text, ok := token.(string)
		if !ok {
			return d.mismatch(token, "a string")
		}
		target.SetString(text)
	case reflect.Bool:
		yes, ok := token.(bool)
		if !ok {
			return d.mismatch(token, "true or false")
		}
		target.SetBool(yes)
	case reflect.Float64:
		number, ok := token.(json.Number)
		if !ok {
			return d.mismatch(token, "a number")
		}
		x, err := strconv.ParseFloat(string(number), 64)
		if err != nil { // beyond the largest float64; the token is a JSON number
			return d.fault("out_of_range", shorten(string(number))+" is too large; numbers must lie within 1.7e308 either way")
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
	return d.members(func(name string) error {
		i, known := shape.index[name]
		if !known {
			return d.refuse("unknown_member", "there is no member "+quote(name)+" here; "+shape.hint(name))
		}
		if seen&(1<<i) != 0 {
			return d.refuse("duplicate_member", "the member comes twice in its object; once is allowed")
		}
		seen |= 1 << i
		token, err := d.next()
		if err != nil || token == nil { // null
			return err
		}
		return d.assign(target.FieldByIndex(shape.fields[i]), token)
	})
}

// texts reads members with string values into a map.
func (d *decoder) texts(target reflect.Value) error {
	into := map[string]string{}
	target.Set(reflect.ValueOf(into))
	return d.members(func(name string) error {
		if _, twice := into[name]; twice {
			return d.refuse("duplicate_member", "the member comes twice in its object; once is allowed")
		}
		var text string
		err := d.value(reflect.ValueOf(&text).Elem())
		into[name] = text
		return err
	})
}

// members calls read with every name up to the closing brace.
func (d *decoder) members(read func(name string) error) error {
	for {
		token, err := d.next()
		if err != nil || token == json.Delim('}') {
			return err
		}
		name := token.(string) // the decoder lets nothing else stand here
		d.path = append(d.path, step{name: name})
		if err := read(name); err != nil {
			return err
		}
		d.path = d.path[:len(d.path)-1]
	}
}

// array reads elements up to the closing bracket.
func (d *decoder) array(target reflect.Value) error {
	target.Set(reflect.MakeSlice(target.Type(), 0, 0))
	d.path = append(d.path, step{array: true})
	for n := 0; ; n++ {
		d.path[len(d.path)-1].index = n
		token, err := d.next()
		if err != nil {
			return err
		}
		if token == json.Delim(']') {
			d.path = d.path[:len(d.path)-1]
			return nil
		}
		if n == target.Cap() {
			target.Grow(1)
		}
		target.SetLen(n + 1)
		if err := d.assign(target.Index(n), token); err != nil {
			return err
		}
	}
}

// next returns the next token, or a problem where the text is not JSON or nests too deep.
func (d *decoder) next() (json.Token, error) {
	if len(d.path)+d.inside > maxDepth {
		return nil, malformed(d.pointer(), fmt.Sprintf("the body nests deeper than %d levels", maxDepth))
	}
	token, err := d.tokens.Token()
	if err != nil {
		return nil, d.syntax()
	}
	return token, nil
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
	token, err := d.next()
	if err != nil {
		return err
	}
	return d.skip(token)
}

// mismatch notes a value of the wrong kind and reads over it.
func (d *decoder) mismatch(token json.Token, want string) error {
	if err := d.fault("wrong_type", "must be "+want+", not "+describe(token)); err != nil {
		return err
	}
	return d.skip(token)
}

// skip reads over the rest of a value that starts with token.
func (d *decoder) skip(token json.Token) error {
	for {
		switch token {
		case json.Delim('{'), json.Delim('['):
			d.inside++
		case json.Delim('}'), json.Delim(']'):
			d.inside--
		}
		if d.inside == 0 {
			return nil
		}
		var err error
		if token, err = d.next(); err != nil {
			return err
		}
	}
}

// describe says what a value is that starts with token.
func describe(token json.Token) string {
	switch t := token.(type) {
	case nil:
		return "null"
	case string:
		return "the string " + quote(t)
	case json.Number:
		return "the number " + shorten(string(t))
	case bool:
		return strconv.FormatBool(t)
	}
	if token == json.Delim('[') {
		return "an array"
	}
	return "an object"
}

// syntax explains why no token could be read.
func (d *decoder) syntax() error {
	rest := d.rest()
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

// rest is what follows the last token, separators left out.
func (d *decoder) rest() []byte {
	return bytes.TrimLeft(d.body[min(d.tokens.InputOffset(), int64(len(d.body))):], " \t\r\n,:")
}

// position says where the reading stands.
func (d *decoder) position() string {
	rest := d.rest()
	done := d.body[:len(d.body)-len(rest)]
	line := 1 + bytes.Count(done, []byte{'\n'})
	column := len(done) - bytes.LastIndexByte(done, '\n')
	near := rest[:min(len(rest), maxQuote/2)]
	if len(near) == 0 {
		return ""
	}
	return fmt.Sprintf(" (line %d, byte %d, at %s)", line, column, strconv.QuoteToASCII(string(near)))
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

// escapePointer writes one name for a pointer in a URI fragment.
func escapePointer(name string) string {
	const plain = "-._~!$&'()*+,;=:@?" // of RFC 3986 fragments, besides letters and digits
	var b strings.Builder
	for _, c := range []byte(strings.NewReplacer("~", "~0", "/", "~1").Replace(shorten(name))) {
		if 'a' <= c && c <= 'z' || 'A' <= c && c <= 'Z' || '0' <= c && c <= '9' || strings.IndexByte(plain, c) >= 0 {
			b.WriteByte(c)
		} else {
			fmt.Fprintf(&b, "%%%02X", c)
		}
	}
	return b.String()
}

// shorten cuts the client's text to what a message can bear.
func shorten(text string) string {
	if len(text) <= maxQuote {
		return text
	}
	return strings.ToValidUTF8(text[:maxQuote], "") + "…"
}

func quote(text string) string { return strconv.Quote(shorten(text)) }

// shape is the JSON view of a struct type: embedded structs are flattened.
type shape struct {
	names  []string
	index  map[string]int
	fields [][]int
}

var shapes sync.Map // of reflect.Type to *shape

func shapeOf(t reflect.Type) *shape {
	if s, ok := shapes.Load(t); ok {
		return s.(*shape)
	}
	s := &shape{index: map[string]int{}}
	s.collect(t, nil)
	if len(s.names) > 64 {
		panic("api: too many members in " + t.String())
	}
	shapes.Store(t, s)
	return s
}

func (s *shape) collect(t reflect.Type, path []int) {
	for i := range t.NumField() {
		field := t.Field(i)
		at := append(slices.Clone(path), i)
		if field.Anonymous {
			s.collect(field.Type, at)
			continue
		}
		name, _, _ := strings.Cut(field.Tag.Get("json"), ",")
		s.index[name] = len(s.names)
		s.names = append(s.names, name)
		s.fields = append(s.fields, at)
	}
}

// hint says which member may have been meant.
func (s *shape) hint(name string) string {
	for _, known := range s.names {
		if squeeze(known) == squeeze(name) {
			return "did you mean " + known + "?"
		}
	}
	return "known are " + strings.Join(s.names, ", ")
}

// squeeze reduces a name to its letters, so that other styles of writing it compare equal.
func squeeze(name string) string {
	return strings.ToLower(strings.NewReplacer("_", "", "-", "", " ", "").Replace(name))
}
