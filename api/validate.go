package api

import (
	"errors"
	"reflect"
	"slices"
	"strings"
	"sync"

	"github.com/go-playground/validator/v10"
)

// embedded stands for a struct that is part of another one in the names that the validator reports.
const embedded = "~"

// theValidator speaks the names of JSON.
var theValidator = sync.OnceValue(func() *validator.Validate {
	v := validator.New(validator.WithRequiredStructEnabled())
	v.RegisterTagNameFunc(func(f reflect.StructField) string {
		if f.Anonymous {
			return embedded
		}
		name, _, _ := strings.Cut(f.Tag.Get("json"), ",")
		return name
	})
	return v
})

// validate checks the tags of the struct that v points to. They bound shape, choices and lengths; whether a state or a
// cycle can be is not for them to say.
func validate(v any) error {
	found, ok := errors.AsType[validator.ValidationErrors](theValidator().Struct(v))
	if !ok {
		return nil
	}
	faults := make([]MemberError, len(found))
	for i, f := range found {
		code, detail := explain(f)
		faults[i] = MemberError{Pointer: validatorPointer(f.Namespace()), Code: code, Detail: detail}
	}
	return invalid(faults)
}

// explain says what a tag asks for.
func explain(f validator.FieldError) (code, detail string) {
	list := f.Kind() == reflect.Slice
	switch f.Tag() {
	case "required":
		return "missing", "is required"
	case "oneof":
		return "not_allowed", "must be one of " + strings.ReplaceAll(f.Param(), " ", ", ")
	case "min":
		if list {
			return "too_few", "must have " + f.Param() + " items at least"
		}
		return "too_short", "must have " + f.Param() + " characters at least"
	case "max":
		if list {
			return "too_many", "may have " + f.Param() + " items at most"
		}
		return "too_long", "may have " + f.Param() + " characters at most"
	case "gt":
		return "out_of_range", "must be greater than " + f.Param()
	}
	return "invalid", "does not fulfil " + f.Tag()
}

// validatorPointer turns "request.~.points[3].id" into "#/points/3/id".
func validatorPointer(namespace string) string {
	_, path, _ := strings.Cut(namespace, ".") // the type's name
	parts := strings.Split(strings.NewReplacer("[", ".", "]", "").Replace(path), ".")
	return pointerTo(slices.DeleteFunc(parts, func(part string) bool { return part == embedded }))
}
