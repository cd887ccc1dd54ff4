package api

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"net/http"
	"net/http/httptest"
	"strings"
	"sync"
	"testing"

	"github.com/getkin/kin-openapi/openapi3"
	"github.com/getkin/kin-openapi/openapi3filter"
	"github.com/getkin/kin-openapi/routers"
	"github.com/getkin/kin-openapi/routers/gorillamux"

	"dewmark/openapi"
)

// contract is the description of the interface, ready to judge requests and responses.
type contract struct {
	doc    *openapi3.T
	router routers.Router
}

var theContract = sync.OnceValues(func() (*contract, error) {
	openapi3filter.RegisterBodyDecoder("application/x-ndjson", openapi3filter.PlainBodyDecoder)
	// The stock CSV decoder wants a schema of its own making; the table is text to the description.
	openapi3filter.RegisterBodyDecoder("text/csv", openapi3filter.PlainBodyDecoder)
	doc, err := openapi3.NewLoader().LoadFromData(openapi.Document)
	if err != nil {
		return nil, err
	}
	router, err := gorillamux.NewRouter(doc)
	return &contract{doc, router}, err
})

func loadContract(t testing.TB) *contract {
	t.Helper()
	c, err := theContract()
	if err != nil {
		t.Fatalf("openapi.yaml: %v", err)
	}
	return c
}

// do sends a request to h and holds request and response against the description of the interface.
func do(t testing.TB, h http.Handler, method, path, body string) *httptest.ResponseRecorder {
	t.Helper()
	r := httptest.NewRequestWithContext(t.Context(), method, path, strings.NewReader(body))
	if body != "" {
		r.Header.Set("Content-Type", "application/json")
	}
	return ask(t, h, r)
}

// ask is do for a request that needs headers of its own.
func ask(t testing.TB, h http.Handler, r *http.Request) *httptest.ResponseRecorder {
	t.Helper()
	var body []byte
	if r.Body != nil {
		var err error
		if body, err = io.ReadAll(r.Body); err != nil {
			t.Fatal(err)
		}
		r.Body = io.NopCloser(bytes.NewReader(body))
	}
	w := httptest.NewRecorder()
	h.ServeHTTP(w, r)
	if err := loadContract(t).check(r, body, w); err != nil {
		t.Errorf("%s %s: %v\nanswer: %.2000s", r.Method, r.URL, err, w.Body)
	}
	return w
}

var (
	shareAPI  sync.Once
	sharedAPI *API
)

// testAPI is ready, logs nothing and is shared; tests that change an API make their own.
func testAPI(t testing.TB) *API {
	t.Helper()
	shareAPI.Do(func() {
		sharedAPI = newAPI(t, nil)
		sharedAPI.setReady(true)
	})
	return sharedAPI
}

func testHandler(t testing.TB) http.Handler {
	t.Helper()
	return testAPI(t).Handler()
}

// check reports where a response is not what the description says, and where a request was answered that the description
// forbids.
func (c *contract) check(r *http.Request, body []byte, w *httptest.ResponseRecorder) error {
	described := r
	if r.Method == http.MethodHead { // as GET, without the body
		described = r.Clone(r.Context())
		described.Method = http.MethodGet
	}
	route, params, err := c.router.FindRoute(described)
	if err != nil {
		return c.checkUnrouted(err, r, w)
	}
	if r.Method == http.MethodHead {
		if route.Operation.Responses.Status(w.Code) == nil {
			return fmt.Errorf("status %d is not described", w.Code)
		}
		return nil
	}
	options := &openapi3filter.Options{IncludeResponseStatus: true, SkipSettingDefaults: true, AuthenticationFunc: openapi3filter.NoopAuthenticationFunc}
	input := &openapi3filter.RequestValidationInput{Request: r, PathParams: params, Route: route, Options: options}
	if err := openapi3filter.ValidateResponse(r.Context(), &openapi3filter.ResponseValidationInput{
		RequestValidationInput: input, Options: options,
		Status: w.Code, Header: w.Header(), Body: io.NopCloser(bytes.NewReader(w.Body.Bytes())),
	}); err != nil {
		return err
	}
	if w.Code >= 400 {
		return checkProblem(r, w)
	}
	if body = goodPart(body, w.Body.Bytes()); r.Method == http.MethodPost && body == nil {
		return nil
	}
	r.Body = io.NopCloser(bytes.NewReader(body))
	if err := openapi3filter.ValidateRequest(r.Context(), input); err != nil {
		return errors.Join(errors.New("a request was answered that the description forbids"), err)
	}
	return c.checkParts(r, body, w)
}

// checkUnrouted checks the answer to a path or a method that the description does not have.
func (c *contract) checkUnrouted(cause error, r *http.Request, w *httptest.ResponseRecorder) error {
	want, name := http.StatusNotFound, "NotFound"
	if errors.Is(cause, routers.ErrMethodNotAllowed) {
		want, name = http.StatusMethodNotAllowed, "MethodNotAllowed"
		if w.Header().Get("Allow") == "" {
			return errors.New("405 without Allow")
		}
	}
	if w.Code != want {
		return errors.Join(errors.New("status is not "+http.StatusText(want)), cause)
	}
	schema := c.doc.Components.Responses[name].Value.Content["application/problem+json"].Schema.Value
	return errors.Join(visit(schema, w.Body.Bytes()), checkProblem(r, w))
}

// checkProblem checks what a schema cannot say about a problem document.
func checkProblem(r *http.Request, w *httptest.ResponseRecorder) error {
	var p struct {
		Status   int
		Instance string
	}
	if got := w.Header().Get("Content-Type"); got != "application/problem+json" {
		return errors.New("the problem has Content-Type " + got)
	}
	if err := json.Unmarshal(w.Body.Bytes(), &p); err != nil {
		return err
	}
	if p.Status != w.Code || p.Instance != r.URL.Path {
		return errors.New("the problem disagrees with the response about status or instance")
	}
	return nil
}

// lineSchemas are what the lines of a stream can be.
var lineSchemas = map[string][]string{
	"/v1/states":   {"StateItem", "FailedItem"},
	"/v1/ratings":  {"RatingRow", "FailedRating"},
	"/v1/readings": {"ReadingsResult", "FailedItem", "SeriesSummary"},
}

// checkParts checks the lines of a stream, and that states are complete unless the request selected properties.
func (c *contract) checkParts(r *http.Request, body []byte, w *httptest.ResponseRecorder) error {
	schemas := c.doc.Components.Schemas
	if w.Header().Get("Content-Type") == "application/x-ndjson" {
		kinds := lineSchemas[r.URL.Path]
		for line := range bytes.Lines(w.Body.Bytes()) {
			var err error
			for _, kind := range kinds {
				if err = visit(schemas[kind].Value, line); err == nil {
					break
				}
			}
			if err != nil || kinds == nil {
				return fmt.Errorf("line %.300s is none of %v: %w", line, kinds, err)
			}
		}
		return nil
	}
	var selection struct{ Properties []string }
	if json.Unmarshal(body, &selection) == nil && len(selection.Properties) > 0 || r.URL.Query().Has("properties") {
		return nil
	}
	if r.Method == http.MethodGet {
		if r.URL.Path != "/v1/states" || w.Code != http.StatusOK {
			return nil
		}
		return visit(schemas["State"].Value, w.Body.Bytes())
	}
	var answer struct {
		States []json.RawMessage
		Rows   []struct{ Bubble, Dew json.RawMessage }
	}
	if json.Unmarshal(w.Body.Bytes(), &answer) != nil {
		return nil // CSV
	}
	states := answer.States
	for _, row := range answer.Rows {
		states = append(states, row.Bubble, row.Dew)
	}
	for _, state := range states {
		if state == nil || visit(schemas["FailedItem"].Value, state) == nil {
			continue
		}
		if err := visit(schemas["State"].Value, state); err != nil {
			return err
		}
	}
	return nil
}

// visit validates JSON text against a schema.
func visit(schema *openapi3.Schema, text []byte) error {
	var v any
	if err := json.Unmarshal(text, &v); err != nil {
		return err
	}
	return schema.VisitJSON(v, openapi3.EnableJSONSchema2020())
}

// batches are the lists of a request whose items are answered one by one, with the lists of the answer.
var batches = map[string]string{"points": "states", "conditions": "operating_points", "samples": "results"}

// goodPart returns what of a request must fit the description when it was answered: without the members that are null,
// which stand for members left out, and without the items of a batch that became problems.
func goodPart(request, answer []byte) []byte {
	var v any
	var answered map[string]any
	if json.Unmarshal(request, &v) != nil || json.Unmarshal(answer, &answered) != nil {
		return request // a stream of lines
	}
	if object, ok := v.(map[string]any); ok {
		for asked, got := range batches {
			items, _ := object[asked].([]any)
			results, _ := answered[got].([]any)
			if items == nil || results == nil {
				continue
			}
			var good []any
			for i, result := range results {
				if result.(map[string]any)["problem"] == nil && i < len(items) {
					good = append(good, items[i])
				}
			}
			if good == nil {
				return nil
			}
			object[asked] = good
		}
	}
	b, err := json.Marshal(pruned(v))
	if err != nil {
		return request
	}
	return b
}

func pruned(v any) any {
	switch v := v.(type) {
	case map[string]any:
		for name, member := range v {
			if member == nil {
				delete(v, name)
			} else {
				v[name] = pruned(member)
			}
		}
	case []any:
		for i := range v {
			v[i] = pruned(v[i])
		}
	}
	return v
}

// The contract is worth what it notices: each of these changes to a good exchange must be an error.
func TestContractNotices(t *testing.T) {
	const (
		good       = `{"refrigerant": "R290", "points": [{"temperature": 5, "pressure": 400}]}`
		impossible = `{"refrigerant": "R290", "points": []}`
	)
	state := func(answer map[string]any) map[string]any { return answer["states"].([]any)[0].(map[string]any) }
	for _, tt := range []struct {
		name, body string
		change     func(w *httptest.ResponseRecorder, answer map[string]any)
	}{
		{"nothing", good, func(*httptest.ResponseRecorder, map[string]any) {}},
		{"a status that is not described", good, func(w *httptest.ResponseRecorder, _ map[string]any) { w.Code = http.StatusCreated }},
		{"another media type", good, func(w *httptest.ResponseRecorder, _ map[string]any) { w.Header().Set("Content-Type", "text/html") }},
		{"a member that is missing", good, func(_ *httptest.ResponseRecorder, a map[string]any) { delete(a, "basis") }},
		{"a member too many", good, func(_ *httptest.ResponseRecorder, a map[string]any) { a["extra"] = 1 }},
		{"a state without a member", good, func(_ *httptest.ResponseRecorder, a map[string]any) { delete(state(a), "density") }},
		{"a state with a member too many", good, func(_ *httptest.ResponseRecorder, a map[string]any) { state(a)["extra"] = 1 }},
		{"a number as text", good, func(_ *httptest.ResponseRecorder, a map[string]any) { state(a)["density"] = "8.3" }},
		{"a null where there is always a number", good, func(_ *httptest.ResponseRecorder, a map[string]any) { state(a)["density"] = nil }},
		{"a number out of bounds", good, func(_ *httptest.ResponseRecorder, a map[string]any) { state(a)["density"] = -1 }},
		{"an unknown choice", good, func(_ *httptest.ResponseRecorder, a map[string]any) { state(a)["phase"] = "plasma" }},
		{"an answer to a forbidden request", `{"refrigerant": "R290", "points": [{"temperature": "5", "pressure": 400}]}`, nil},
		{"a problem of another status", impossible, func(_ *httptest.ResponseRecorder, a map[string]any) { a["status"] = 400 }},
		{"a problem of another resource", impossible, func(_ *httptest.ResponseRecorder, a map[string]any) { a["instance"] = "/" }},
		{"a problem as plain JSON", impossible, func(w *httptest.ResponseRecorder, _ map[string]any) {
			w.Header().Set("Content-Type", "application/json")
		}},
	} {
		sent := tt.body
		if tt.change == nil {
			sent = good // the answer to another request
			tt.change = func(*httptest.ResponseRecorder, map[string]any) {}
		}
		r := httptest.NewRequestWithContext(t.Context(), http.MethodPost, "/v1/states", strings.NewReader(sent))
		r.Header.Set("Content-Type", "application/json")
		w := httptest.NewRecorder()
		testHandler(t).ServeHTTP(w, r)
		var answer map[string]any
		if err := json.Unmarshal(w.Body.Bytes(), &answer); err != nil {
			t.Fatal(err)
		}
		tt.change(w, answer)
		b, err := json.Marshal(answer)
		if err != nil {
			t.Fatal(err)
		}
		w.Body = bytes.NewBuffer(b)
		if err := loadContract(t).check(r, []byte(tt.body), w); (err == nil) != (tt.name == "nothing") {
			t.Errorf("%s: %v", tt.name, err)
		}
	}
}
