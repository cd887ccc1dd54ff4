package api

import (
	"fmt"
	"reflect"
	"slices"
	"strconv"
	"strings"
	"sync"
	"unicode/utf8"
)

// A tag validate:"required,min=1" bounds the shape of a member: whether it must be there, lengths, choices, signs. Whether a
// state or a cycle can be is not for tags to say. The first of its rules that a member breaks is the one that is told of.
//
// The usual validators look up methods by names that are known at run time alone. That makes the linker keep every exported
// method of every type, which are 7 MB of the binary; these few rules need none.

// rule is one demand of a tag.
type rule struct {
	name, param string
	limit       float64 // of min, max and gt
}

// ruled is a member of a struct with rules of its own or below it.
type ruled struct {
	index int    // of the field
	name  string // in JSON; empty for a struct that is part of the one around it
	rules []rule
	below []ruled // where it is a struct, a pointer to one or a list of them
}

var ruledMembers sync.Map // of []ruled by reflect.Type

// validate holds the struct that v points to against its tags.
func validate(v any) error {
	of := reflect.ValueOf(v).Elem()
	members, ok := ruledMembers.Load(of.Type())
	if !ok {
		members, _ = ruledMembers.LoadOrStore(of.Type(), rulesOf(of.Type()))
	}
	breaches := breachesOf(of, members.([]ruled))
	faults := make([]MemberError, len(breaches))
	for i, b := range breaches {
		slices.Reverse(b.path)
		faults[i] = MemberError{Pointer: pointerTo(b.path), Code: b.code, Detail: b.detail}
	}
	return invalid(faults)
}

// rulesOf reads the tags of a struct and of those below it, which must not contain each other.
func rulesOf(t reflect.Type) []ruled {
	var all []ruled
	for i := range t.NumField() {
		f := t.Field(i)
		if !f.IsExported() && !f.Anonymous {
			continue
		}
		m := ruled{index: i}
		if !f.Anonymous {
			m.name, _, _ = strings.Cut(f.Tag.Get("json"), ",")
		}
		if tag := f.Tag.Get("validate"); tag != "" {
			for text := range strings.SplitSeq(tag, ",") {
				m.rules = append(m.rules, parseRule(text))
			}
		}
		inner := f.Type
		for inner.Kind() == reflect.Pointer || inner.Kind() == reflect.Slice {
			inner = inner.Elem()
		}
		if inner.Kind() == reflect.Struct {
			m.below = rulesOf(inner)
		}
		if len(m.rules) > 0 || len(m.below) > 0 {
			all = append(all, m)
		}
	}
	return all
}

func parseRule(text string) rule {
	var r rule
	var err error
	switch r.name, r.param, _ = strings.Cut(text, "="); r.name {
	case "required", "omitempty", "oneof":
	case "min", "max", "gt":
		r.limit, err = strconv.ParseFloat(r.param, 64)
	default:
		err = strconv.ErrSyntax
	}
	if err != nil {
		panic(fmt.Sprintf("api: %q is no rule of a member", text))
	}
	return r
}

// breach is a rule that a member breaks.
type breach struct {
	path         []string // names from the member outwards
	code, detail string
}

// breachesOf returns the breaches of members of v in their order.
func breachesOf(v reflect.Value, members []ruled) []breach {
	var all []breach
	for i := range members {
		m := &members[i]
		found := m.breaches(v.Field(m.index))
		if m.name != "" {
			for k := range found {
				found[k].path = append(found[k].path, m.name)
			}
		}
		all = append(all, found...)
	}
	return all
}

func (m *ruled) breaches(field reflect.Value) []breach {
	for i := range m.rules {
		r := &m.rules[i]
		if r.name == "omitempty" && field.IsZero() {
			break
		}
		if code, detail := r.holds(field); code != "" {
			return []breach{{nil, code, detail}}
		}
	}
	if len(m.below) == 0 {
		return nil
	}
	return descend(field, m.below)
}

// descend returns the breaches below a struct, a pointer or a list.
func descend(v reflect.Value, below []ruled) []breach {
	switch v.Kind() {
	case reflect.Pointer:
		if v.IsNil() {
			return nil
		}
		return descend(v.Elem(), below)
	case reflect.Slice:
		var all []breach
		for i := range v.Len() {
			found := descend(v.Index(i), below)
			for k := range found {
				found[k].path = append(found[k].path, strconv.Itoa(i))
			}
			all = append(all, found...)
		}
		return all
	default:
		return breachesOf(v, below)
	}
}

// holds returns no code where the field keeps to the rule, and else what is wrong with it. What is not there breaks none but
// required.
func (r *rule) holds(field reflect.Value) (code, detail string) {
	if r.name == "required" {
		if field.IsZero() { // an empty list is not: it was sent
			return "missing", "is required"
		}
		return "", ""
	}
	if field.Kind() == reflect.Pointer {
		if field = field.Elem(); !field.IsValid() {
			return "", ""
		}
	}
	list := field.Kind() == reflect.Slice
	length := func() float64 {
		if list {
			return float64(field.Len())
		}
		return float64(utf8.RuneCountInString(field.String()))
	}
	switch {
	case r.name == "oneof" && !slices.Contains(strings.Fields(r.param), field.String()):
		return "not_allowed", "must be one of " + strings.ReplaceAll(r.param, " ", ", ")
	case r.name == "gt" && !(field.Float() > r.limit):
		return "out_of_range", "must be greater than " + r.param
	case r.name == "min" && length() < r.limit && list:
		return "too_few", "must have " + r.param + " items at least"
	case r.name == "min" && length() < r.limit:
		return "too_short", "must have " + r.param + " characters at least"
	case r.name == "max" && length() > r.limit && list:
		return "too_many", "may have " + r.param + " items at most"
	case r.name == "max" && length() > r.limit:
		return "too_long", "may have " + r.param + " characters at most"
	}
	return "", ""
}
