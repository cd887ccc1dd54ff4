package api

import (
	"encoding/json"
	"fmt"
	"maps"
	"net/http"
	"net/http/httptest"
	"regexp"
	"slices"
	"strings"
	"testing"

	"github.com/getkin/kin-openapi/openapi3"
	"github.com/goccy/go-yaml"

	"dewmark/openapi"
)

func TestDescriptionIsValid(t *testing.T) {
	doc := loadContract(t).doc
	if err := doc.Validate(t.Context()); err != nil {
		t.Fatal(err)
	}
	if !strings.HasPrefix(doc.OpenAPI, "3.1.") {
		t.Errorf("openapi is %s, want 3.1", doc.OpenAPI)
	}
}

// The routes and the paths are the same set. HEAD goes with every GET and is not described by itself.
func TestRoutesAreDescribed(t *testing.T) {
	var served, described []string
	parameter := regexp.MustCompile(`:([a-z_]+)`)
	for _, route := range testAPI(t).engine.Routes() {
		if route.Method != http.MethodHead {
			served = append(served, route.Method+" "+parameter.ReplaceAllString(route.Path, "{$1}"))
		}
	}
	for path, item := range loadContract(t).doc.Paths.Map() {
		for method := range item.Operations() {
			described = append(described, method+" "+path)
		}
	}
	slices.Sort(served)
	slices.Sort(described)
	if !slices.Equal(served, described) {
		t.Errorf("served:    %q\ndescribed: %q", served, described)
	}
}

// Every example of a request fits its schema and, sent, is answered as documented: 200 without a failed item, but for the
// examples whose name says otherwise.
func TestRequestExamplesReplay(t *testing.T) {
	h := testHandler(t)
	seen := 0
	for path, item := range loadContract(t).doc.Paths.Map() {
		for method, operation := range item.Operations() {
			if operation.RequestBody == nil {
				continue
			}
			for kind, media := range operation.RequestBody.Value.Content {
				for name, example := range media.Examples {
					seen++
					at := fmt.Sprintf("%s %s %s %s", method, path, kind, name)
					if err := media.Schema.Value.VisitJSON(example.Value.Value, openapi3.EnableJSONSchema2020()); err != nil {
						t.Errorf("%s: %v", at, err)
						continue
					}
					body, ok := example.Value.Value.(string)
					if !ok {
						b, err := json.Marshal(example.Value.Value)
						if err != nil {
							t.Fatal(err)
						}
						body = string(b)
					}
					r := httptest.NewRequestWithContext(t.Context(), method, path, strings.NewReader(body))
					r.Header.Set("Content-Type", kind)
					w := ask(t, h, r)
					if w.Code != http.StatusOK {
						t.Errorf("%s: status %d: %s", at, w.Code, w.Body)
					}
					if bad := strings.Contains(w.Body.String(), `"problem"`); bad != strings.Contains(name, "bad") {
						t.Errorf("%s: answered %.1000s", at, w.Body)
					}
				}
			}
		}
	}
	if seen < 8 {
		t.Errorf("only %d examples found", seen)
	}
}

// An example of a response is the answer to the example of a request with the same name.
func TestResponseExamples(t *testing.T) {
	seen := 0
	for path, item := range loadContract(t).doc.Paths.Map() {
		if item.Post == nil {
			continue
		}
		media := item.Post.Responses.Status(http.StatusOK).Value.Content["application/json"]
		for name, example := range media.Examples {
			seen++
			request, ok := item.Post.RequestBody.Value.Content["application/json"].Examples[name]
			if !ok {
				t.Errorf("%s: no request is called %s", path, name)
				continue
			}
			body, err := json.Marshal(request.Value.Value)
			if err != nil {
				t.Fatal(err)
			}
			var got any
			if err := json.Unmarshal(do(t, testHandler(t), http.MethodPost, path, string(body)).Body.Bytes(), &got); err != nil {
				t.Fatal(err)
			}
			compareJSON(t, path+" "+name, example.Value.Value, got)
		}
	}
	if seen < 2 {
		t.Errorf("only %d examples found", seen)
	}
}

// Keywords of OpenAPI 3.0 are silently ignored in 3.1, and generators make 32-bit floats of numbers without format.
func TestDescriptionKeywords(t *testing.T) {
	var tree any
	if err := yaml.Unmarshal(openapi.Document, &tree); err != nil {
		t.Fatal(err)
	}
	walk(tree, "#", func(path string, node map[string]any) {
		for _, old := range []string{"nullable", "example"} {
			if _, there := node[old]; there {
				t.Errorf("%s has %s, a keyword of OpenAPI 3.0", path, old)
			}
		}
		for _, bound := range []string{"exclusiveMinimum", "exclusiveMaximum"} {
			if _, boolean := node[bound].(bool); boolean {
				t.Errorf("%s has a boolean %s, as in OpenAPI 3.0", path, bound)
			}
		}
		if isNumber(node["type"]) && node["format"] != "double" {
			t.Errorf("%s is a number without format: double", path)
		}
	})
}

func isNumber(kind any) bool {
	if list, ok := kind.([]any); ok {
		return slices.Contains(list, any("number"))
	}
	return kind == "number"
}

// walk calls visit for every object of a YAML tree.
func walk(tree any, path string, visit func(path string, node map[string]any)) {
	switch tree := tree.(type) {
	case map[string]any:
		visit(path, tree)
		for name, member := range tree {
			walk(member, path+"/"+name, visit)
		}
	case []any:
		for i, element := range tree {
			walk(element, fmt.Sprintf("%s/%d", path, i), visit)
		}
	}
}

// Unknown members are refused, so every object of a request must be closed; every object of a response says what is
// always there.
func TestObjectsAreExact(t *testing.T) {
	for path, item := range loadContract(t).doc.Paths.Map() {
		for method, operation := range item.Operations() {
			at := method + " " + path
			if operation.RequestBody != nil {
				for kind, media := range operation.RequestBody.Value.Content {
					checkObjects(t, at+" request "+kind, media.Schema, true, nil)
				}
			}
			for status, response := range operation.Responses.Map() {
				for kind, media := range response.Value.Content {
					if strings.HasPrefix(path, "/openapi.") && status == "200" {
						continue // the description of OpenAPI itself stands elsewhere
					}
					checkObjects(t, at+" "+status+" "+kind, media.Schema, false, nil)
				}
			}
		}
	}
}

// checkObjects checks the objects below a schema; seen ends the recursion where problems hold problems.
func checkObjects(t *testing.T, at string, ref *openapi3.SchemaRef, request bool, seen []*openapi3.Schema) {
	if ref == nil || slices.Contains(seen, ref.Value) {
		return
	}
	s := ref.Value
	seen = append(seen, s)
	closed := s.AdditionalProperties.Has != nil && !*s.AdditionalProperties.Has
	shut := s.UnevaluatedProperties.Has != nil && !*s.UnevaluatedProperties.Has
	if s.Type.Is(openapi3.TypeObject) {
		switch {
		case request && !closed && s.AdditionalProperties.Schema == nil:
			t.Errorf("%s: an object of a request lets unknown members pass", at)
		case !request && !closed && !shut && len(s.Properties) > 0 && len(s.Required) == 0 && !strings.HasSuffix(ref.Ref, "/StateProperties"):
			t.Errorf("%s: an object of a response neither is closed nor requires anything", at)
		}
	}
	for name, member := range s.Properties {
		checkObjects(t, at+"/"+name, member, request, seen)
	}
	checkObjects(t, at+"[]", s.Items, request, seen)
	for _, list := range []openapi3.SchemaRefs{s.AllOf, s.AnyOf, s.OneOf} {
		for i, part := range list {
			if part.Ref != "" { // an inline part only adds conditions
				checkObjects(t, fmt.Sprintf("%s(%d)", at, i), part, request, seen)
			}
		}
	}
}

// Validators of OpenAPI skip lists of examples.
func TestSchemaExamplesFit(t *testing.T) {
	seen := 0
	for name, schema := range loadContract(t).doc.Components.Schemas {
		for _, example := range schema.Value.Examples {
			seen++
			if err := schema.Value.VisitJSON(example, openapi3.EnableJSONSchema2020()); err != nil {
				t.Errorf("%s: example %v: %v", name, example, err)
			}
		}
		for member, property := range schema.Value.Properties {
			for _, example := range property.Value.Examples {
				seen++
				if err := property.Value.VisitJSON(example, openapi3.EnableJSONSchema2020()); err != nil {
					t.Errorf("%s.%s: example %v: %v", name, member, example, err)
				}
			}
		}
	}
	if seen < 10 {
		t.Errorf("only %d examples found", seen)
	}
}

// The unit codes stand in units.go and in the description; neither may know more than the other.
func TestUnitCodesAgree(t *testing.T) {
	schemas := loadContract(t).doc.Components.Schemas
	request, response := schemas["Units"].Value, schemas["UnitsUsed"].Value
	if len(request.Properties) != len(quantities)+1 || len(response.Properties) != len(quantities) {
		t.Errorf("the description has %d kinds of quantity, %d in responses, the code %d",
			len(request.Properties)-1, len(response.Properties), len(quantities))
	}
	for _, q := range quantities {
		schema := request.Properties[q.name]
		if schema == nil || response.Properties[q.name] == nil {
			t.Errorf("the description lacks %s", q.name)
			continue
		}
		var described, known []string
		for _, code := range schema.Value.Enum {
			described = append(described, code.(string))
		}
		for _, u := range q.units {
			known = append(known, u.code)
		}
		if !slices.Equal(described, known) {
			t.Errorf("%s: described %q, known %q", q.name, described, known)
		}
		if want := fmt.Sprintf("SI `%s`, IP `%s`.", q.si, q.ip); !strings.HasSuffix(schema.Value.Description, want) {
			t.Errorf("%s: the description ends %q, want %q", q.name, schema.Value.Description, want)
		}
	}
}

// The members of a state stand in states.go and in the description.
func TestStateMembersAgree(t *testing.T) {
	schemas := loadContract(t).doc.Components.Schemas
	var known []string
	for _, f := range stateFields {
		known = append(known, f.name)
	}
	if got := schemas["State"].Value.Required; !slices.Equal(got, known[:firstDerivedField]) {
		t.Errorf("State requires %q, the code has %q", got, known)
	}
	known = append(known, liquidComposition, vapourComposition, "extrapolated") // written only where there is something to say
	slices.Sort(known)
	if got := slices.Sorted(maps.Keys(schemas["StateProperties"].Value.Properties)); !slices.Equal(got, known) {
		t.Errorf("StateProperties has %q, the code %q", got, known)
	}
	for _, name := range append(selectable(), "phase") {
		if !slices.Contains(known, name) {
			t.Errorf("%s can be selected and is no member of a state", name)
		}
	}
}
