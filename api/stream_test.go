package api

import (
	"bufio"
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"io"
	"net/http"
	"net/http/httptest"
	"runtime"
	"strings"
	"testing"
	"time"
)

// lines sends a stream and returns the lines of the answer.
func lines(t *testing.T, body string, status int) ([]string, *httptest.ResponseRecorder) {
	t.Helper()
	r := httptest.NewRequestWithContext(t.Context(), http.MethodPost, "/v1/states", strings.NewReader(body))
	r.Header.Set("Content-Type", mediaLines)
	w := ask(t, testHandler(t), r)
	if w.Code != status {
		t.Fatalf("status %d, want %d: %.1000s", w.Code, status, w.Body)
	}
	return strings.Split(strings.TrimSuffix(w.Body.String(), "\n"), "\n"), w
}

// A stream answers line for line what a batch answers item for item.
func TestStreamIsTheBatch(t *testing.T) {
	const head = `"refrigerant": "R290", "datum": "NBP", "units": {"pressure": "bar(g)"}, "site": {"altitude": 450}`
	points := []string{
		`{"id": "a", "temperature": 5, "pressure": 3}`, `{"temperature": 5, "pressure": -3}`, `{}`, `{"id": "b", "temperature": 40, "quality": 0}`,
		`{"temperature": 40, "enthalpy": 300, "phase": "vapour"}`,
	}
	got, w := lines(t, "{"+head+"}\n"+strings.Join(points, "\n")+"\n", 200)
	batch := answer(t, "POST", "/v1/states", "{"+head+`, "points": [`+strings.Join(points, ",")+"]}", 200)
	if len(got) != len(points) {
		t.Fatalf("%d lines: %q", len(got), got)
	}
	for i, line := range got {
		var v any
		if err := json.Unmarshal([]byte(line), &v); err != nil {
			t.Fatal(err)
		}
		if fmt.Sprint(v) != fmt.Sprint(at(batch, "states", i)) {
			t.Errorf("line %d: %s\nbatch: %v", i, line, at(batch, "states", i))
		}
	}
	var announced jsonObject
	if err := json.Unmarshal([]byte(w.Header().Get(headHeader)), &announced); err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"refrigerant", "datum", "units", "site", "basis"} {
		if fmt.Sprint(announced[name]) != fmt.Sprint(batch[name]) {
			t.Errorf("%s: %v in the head, %v in the batch", name, announced[name], batch[name])
		}
	}
}

// A line that is not a point answers in its place.
func TestStreamKeepsGoing(t *testing.T) {
	got, _ := lines(t, "\n"+`{"refrigerant": "R290", "properties": ["density"]}`+"\r\n\n"+strings.Join([]string{
		`{"temperature": 5, "pressure": 400}`, ``, `{"temperature": 5, `, `{"id": "x", "temperature": "5"}`, `{"temperature": 5, "pressure": NaN}`, `[]`,
		`{"temperature": 5, "pressure": 400, "flow": 1}`, `{"id": "` + strings.Repeat("x", maxLine) + `"}`, `{"temperature": 6, "pressure": 400} {}`, `{"temperature": 6, "pressure": 400}`,
	}, "\n"), 200)
	want := []string{
		"", "malformed-json #/points/1", "invalid-request #/points/2/temperature", "malformed-json #/points/3/pressure", "invalid-request #/points/4",
		"invalid-request #/points/5/flow", "invalid-request #/points/6", "malformed-json #/points/7", "",
	}
	if len(got) != len(want) {
		t.Fatalf("%d lines: %q", len(got), got)
	}
	for i, line := range got {
		var v jsonObject
		if err := json.Unmarshal([]byte(line), &v); err != nil {
			t.Fatal(err)
		}
		problem := at(v, "problem")
		if want[i] == "" {
			if problem != nil || at(v, "density") == nil || at(v, "enthalpy") != nil {
				t.Errorf("line %d: %s", i, line)
			}
			continue
		}
		if have := fmt.Sprintf("%s %s", strings.TrimPrefix(fmt.Sprint(at(problem, "type")), "/problems/"), at(problem, "errors", 0, "pointer")); have != want[i] {
			t.Errorf("line %d: %s, want %s", i, line, want[i])
		}
	}
}

// A bad head is refused before anything is sent.
func TestStreamRefusesBadHeads(t *testing.T) {
	for body, pointer := range map[string]string{
		"":                                      "#",
		"\n\n":                                  "#",
		`{"refrigerant": "R290", "poi`:          "#",
		`{"refrigerant": "R290", "points": []}`: "#/points",
		`{"refrigerant": "R29"}`:                "#/refrigerant",
		`{"refrigerant": "R290", "units": {"pressure": "bar(g)"}}`:      "#/site",
		`{"refrigerant": "R290", "properties": ["colour"]}`:             "#/properties/0",
		`{"refrigerant": "R290", "x": "` + strings.Repeat("x", maxLine): "#",
	} {
		status := 422
		if pointer == "#" {
			status = 400
		}
		_, w := lines(t, body, status)
		if p := problemOf(t, w); len(p.Errors) == 0 || p.Errors[0].Pointer != pointer {
			t.Errorf("%.80q: %s", body, w.Body)
		}
	}
	r := httptest.NewRequestWithContext(t.Context(), http.MethodPost, "/v1/states", strings.NewReader("{}"))
	r.Header.Set("Content-Type", mediaLines)
	r.Header.Set("Accept", mediaJSON)
	if w := ask(t, testHandler(t), r); w.Code != 406 {
		t.Errorf("accepts JSON alone: %d", w.Code)
	}
}

// connected serves the test API on a loopback address.
func connected(t *testing.T) (client *http.Client, url string) {
	t.Helper()
	server := httptest.NewServer(testHandler(t))
	t.Cleanup(server.Close)
	return server.Client(), server.URL
}

// A client may wait for each answer before it sends the next point.
func TestStreamAnswersAtOnce(t *testing.T) {
	client, url := connected(t)
	body, out := io.Pipe()
	r, err := http.NewRequestWithContext(t.Context(), http.MethodPost, url+"/v1/states", body)
	if err != nil {
		t.Fatal(err)
	}
	r.Header.Set("Content-Type", mediaLines)
	responses := make(chan *http.Response, 1)
	go func() {
		w, err := client.Do(r)
		if err != nil {
			t.Error(err)
			w = &http.Response{Body: http.NoBody}
		}
		responses <- w
	}()
	if _, err := io.WriteString(out, `{"refrigerant": "R290", "properties": ["temperature"]}`+"\n"); err != nil {
		t.Fatal(err)
	}
	w := <-responses // before there is any point
	defer w.Body.Close()
	in := bufio.NewReader(w.Body)
	for i := range 50 {
		if _, err := fmt.Fprintf(out, `{"temperature": %d, "quality": 1}`+"\n", i); err != nil {
			t.Fatal(err)
		}
		line, err := in.ReadString('\n')
		if want := fmt.Sprintf(`{"phase":"vapour","temperature":%d}`+"\n", i); err != nil || line != want {
			t.Fatalf("point %d: %q, %v", i, line, err)
		}
	}
	out.Close()
	if rest, err := io.ReadAll(in); err != nil || len(rest) > 0 {
		t.Errorf("after the end: %q, %v", rest, err)
	}
}

// A request that breaks off gets an answer that breaks off: half of it must not pass for all.
func TestStreamBreaksOff(t *testing.T) {
	client, url := connected(t)
	body, out := io.Pipe()
	ctx, cancel := context.WithTimeout(t.Context(), 20*time.Second)
	defer cancel()
	r, err := http.NewRequestWithContext(ctx, http.MethodPost, url+"/v1/states", body)
	if err != nil {
		t.Fatal(err)
	}
	r.Header.Set("Content-Type", mediaLines)
	go func() {
		_, _ = io.WriteString(out, `{"refrigerant": "R290"}`+"\n"+`{"temperature": 5, "pressure": 400}`+"\n"+`{"temperature"`)
		out.CloseWithError(io.ErrUnexpectedEOF)
	}()
	w, err := client.Do(r)
	if err != nil {
		return // the transport may give up before it has seen the answer
	}
	defer w.Body.Close()
	if text, err := io.ReadAll(w.Body); err == nil {
		t.Errorf("the answer looks complete: %q", text)
	}
}

// endless is a body of n lines that is never in memory as a whole.
type endless struct {
	head, line []byte
	n          int
	rest       []byte
}

func (e *endless) Read(b []byte) (int, error) {
	if len(e.rest) == 0 {
		if e.n == 0 {
			return 0, io.EOF
		}
		e.n--
		if e.rest = e.line; e.head != nil {
			e.rest, e.head = e.head, nil
		}
	}
	n := copy(b, e.rest)
	e.rest = e.rest[n:]
	return n, nil
}

// sink counts what it is sent.
type sink struct {
	header http.Header
	lines  int
	peak   uint64
}

func (s *sink) Header() http.Header { return s.header }
func (s *sink) WriteHeader(int)     {}
func (s *sink) Write(b []byte) (int, error) {
	s.lines += bytes.Count(b, []byte{'\n'})
	var m runtime.MemStats
	runtime.ReadMemStats(&m)
	s.peak = max(s.peak, m.HeapAlloc)
	return len(b), nil
}

// A long stream takes no more memory than a short one. An answer of 100 000 states has 60 MB.
func TestStreamMemory(t *testing.T) {
	peak := func(n int) uint64 {
		runtime.GC()
		r := httptest.NewRequest(http.MethodPost, "/v1/states", &endless{
			head: []byte(`{"refrigerant": "R290"}` + "\n"), line: []byte(`{"temperature": 5, "pressure": 400}` + "\n"), n: n + 1,
		})
		r.Header.Set("Content-Type", mediaLines)
		s := &sink{header: http.Header{}}
		testHandler(t).ServeHTTP(s, r)
		if s.lines != n {
			t.Fatalf("%d lines, want %d", s.lines, n)
		}
		return s.peak
	}
	short := peak(2000)
	if long := peak(100_000); long > short+16<<20 {
		t.Errorf("heap of %d MB for a short stream, %d MB for a long one", short>>20, long>>20)
	}
}
