package api

import (
	"reflect"
	"slices"
	"strings"
	"sync"
)

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
