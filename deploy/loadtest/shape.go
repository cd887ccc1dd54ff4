package main

import (
	"fmt"
	"maps"
	"reflect"
	"slices"
)

var (
	numberType = reflect.TypeFor[*float64]() // null stands for what does not exist
	textType   = reflect.TypeFor[string]()
)

// typeOf returns the Go type that a programmer would declare for a JSON value: a struct for an object, a slice for an array.
// Members of requests get tags for the validator.
func typeOf(v any, request bool) reflect.Type {
	switch v := v.(type) {
	case map[string]any:
		fields := make([]reflect.StructField, 0, len(v))
		for i, name := range slices.Sorted(maps.Keys(v)) {
			member := typeOf(v[name], request)
			tag := fmt.Sprintf("json:%q", name)
			if request {
				tag += fmt.Sprintf(" validate:%q", rule(member))
			}
			fields = append(fields, reflect.StructField{Name: fmt.Sprintf("F%d", i), Type: member, Tag: reflect.StructTag(tag)})
		}
		return reflect.StructOf(fields)
	case []any:
		if len(v) == 0 {
			return reflect.SliceOf(textType)
		}
		if _, objects := v[0].(map[string]any); !objects {
			return reflect.SliceOf(typeOf(v[0], request))
		}
		all := map[string]any{} // with every member that some element has
		for _, element := range v {
			for name, value := range element.(map[string]any) {
				if all[name] == nil {
					all[name] = value
				}
			}
		}
		return reflect.SliceOf(typeOf(all, request))
	case string:
		return textType
	case bool:
		return reflect.TypeFor[bool]()
	}
	return numberType
}

// rule returns what a validator would usually check of a member.
func rule(t reflect.Type) string {
	switch t.Kind() {
	case reflect.Struct:
		return "required"
	case reflect.Slice:
		return "required,max=10000,dive"
	case reflect.String:
		return "required,max=64"
	case reflect.Pointer:
		return "required,gte=-1e6,lte=1e6"
	}
	return "omitempty"
}
