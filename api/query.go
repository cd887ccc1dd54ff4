package api

import (
	"encoding/json"
	"maps"
	"net/url"
	"reflect"
	"slices"
	"strings"
)

// decodeQuery reads the parameters of a query into the struct that v points to, as if they were members of a JSON object:
// dots lead into members of members, commas part the items of a list, and system is short for units.system. It returns a
// [*Problem] as decodeJSON does, its pointers leading into that object.
func decodeQuery(query url.Values, v any) error {
	object := map[string]any{}
	var faults []MemberError
	for _, name := range slices.Sorted(maps.Keys(query)) {
		path := strings.Split(name, ".")
		if name == "system" {
			path = []string{"units", "system"}
		}
		if len(query[name]) > 1 || !put(object, path, queryValue(typeAt(reflect.TypeOf(v).Elem(), path), query[name][0])) {
			faults = append(faults, MemberError{Pointer: pointerTo(path), Code: "duplicate_member", Detail: "the parameter comes twice; once is allowed"})
		}
	}
	if len(faults) > 0 {
		return invalid(faults)
	}
	text, err := json.Marshal(object)
	if err != nil {
		return err
	}
	return decodeJSON(text, v)
}

// put stores value under path and reports whether the place was free.
func put(object map[string]any, path []string, value any) bool {
	name := path[0]
	if len(path) == 1 {
		_, taken := object[name]
		object[name] = value
		return !taken
	}
	inner, ok := object[name].(map[string]any)
	if !ok {
		if _, taken := object[name]; taken {
			return false
		}
		inner = map[string]any{}
		object[name] = inner
	}
	return put(inner, path[1:], value)
}

// typeAt returns the type of the member that path leads to, or nil.
func typeAt(t reflect.Type, path []string) reflect.Type {
	for i, name := range path {
		if t == typeOfSubstance {
			if len(path)-i == 2 {
				return reflect.TypeFor[float64]() // the fraction of a component
			}
			return nil
		}
		if t.Kind() == reflect.Pointer {
			t = t.Elem()
		}
		if t.Kind() != reflect.Struct {
			return nil // values of maps are text anyway
		}
		s := shapeOf(t)
		i, ok := s.index[name]
		if !ok {
			return nil
		}
		t = t.FieldByIndex(s.fields[i]).Type
	}
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	return t
}

// queryValue returns text as the JSON value that a member of type t wants; where text is none, it stays a string, which
// the decoder then refuses.
func queryValue(t reflect.Type, text string) any {
	switch {
	case t == nil:
		return text
	case t.Kind() == reflect.Slice:
		return strings.Split(text, ",")
	case t.Kind() == reflect.Float64 || t.Kind() == reflect.Bool:
		if trimmed := strings.TrimSpace(text); trimmed != "null" && json.Valid([]byte(trimmed)) {
			return json.RawMessage(trimmed)
		}
	}
	return text
}
