package api

import (
	"bytes"
	"fmt"
	"log/slog"
	"net/http"
	"net/http/httptest"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/prometheus/client_golang/prometheus/testutil"
)

const stateOfR32 = "/v1/states?refrigerant=R32&temperature=0&quality=1"

// tokenFile writes a file of tokens and returns its name.
func tokenFile(t *testing.T, lines ...string) string {
	t.Helper()
	name := filepath.Join(t.TempDir(), "tokens")
	if err := os.WriteFile(name, []byte(strings.Join(lines, "\n")), 0o600); err != nil {
		t.Fatal(err)
	}
	return name
}

func newToken(t *testing.T, name string) (token, line string) {
	t.Helper()
	token, line, err := NewToken(name)
	if err != nil {
		t.Fatal(err)
	}
	return token, line
}

// withHeaders asks for a path with headers given as name, value, name, value.
func withHeaders(t *testing.T, h http.Handler, method, path string, headers ...string) *httptest.ResponseRecorder {
	t.Helper()
	r := httptest.NewRequestWithContext(t.Context(), method, path, nil)
	for i := 0; i < len(headers); i += 2 {
		r.Header.Add(headers[i], headers[i+1])
	}
	return ask(t, h, r)
}

// Tokens guard /v1 and nothing else; a client may have two while it changes from one to the other.
func TestTokens(t *testing.T) {
	old, oldLine := newToken(t, "quoting")
	fresh, freshLine := newToken(t, "quoting")
	stranger, _ := newToken(t, "quoting")
	tokens, err := LoadTokens(tokenFile(t, "# clients", "", oldLine, freshLine))
	if err != nil {
		t.Fatal(err)
	}
	var log bytes.Buffer
	a := newAPI(t, func(o *Options) {
		o.Tokens = tokens
		o.Logger = slog.New(slog.NewJSONHandler(&log, &slog.HandlerOptions{Level: slog.LevelDebug}))
	})
	for _, tt := range []struct {
		path, authorization string
		status              int
	}{
		{stateOfR32, "Bearer " + old, 200},
		{stateOfR32, "bearer  " + fresh + " ", 200},
		{stateOfR32, "", 401},
		{stateOfR32, "Bearer", 401},
		{stateOfR32, "Bearer ", 401},
		{stateOfR32, "Bearer " + stranger, 401},
		{stateOfR32, "Bearer " + old[:len(old)-1], 401},
		{stateOfR32, "Bearer " + strings.Fields(oldLine)[1], 401}, // who can read the file cannot call
		{stateOfR32, "Basic " + old, 401},
		{"/v1/refrigerants", "", 401},
		{"/v1/refrigerants", "Bearer " + fresh, 200},
		{"/livez", "", 200},
		{"/readyz", "", 503},
		{"/openapi.yaml", "", 200},
		{"/elsewhere", "", 404},
	} {
		w := withHeaders(t, a.Handler(), "GET", tt.path, "Authorization", tt.authorization)
		if w.Code != tt.status {
			t.Errorf("%s with %q: %d %.200s", tt.path, tt.authorization, w.Code, w.Body)
		}
		challenge := w.Header().Get("WWW-Authenticate")
		if w.Code == 401 && (!strings.HasPrefix(challenge, "Bearer realm=") || problemOf(t, w).Type != "/problems/unauthorized") {
			t.Errorf("%s with %q: %q, %s", tt.path, tt.authorization, challenge, w.Body)
		}
		if w.Code == 200 && strings.HasPrefix(tt.path, "/v1") && !strings.HasPrefix(w.Header().Get("Cache-Control"), "private") {
			t.Errorf("%s may be kept by a shared cache: %v", tt.path, w.Header())
		}
	}
	// A path that does not exist is no way to tell which do.
	if w := serve(a.Handler(), httptest.NewRequest("GET", "/v1/nowhere", nil)); w.Code != 401 {
		t.Errorf("unknown path: %d", w.Code)
	}
	if !strings.Contains(log.String(), `"client":"quoting"`) {
		t.Errorf("the log does not name the client: %s", &log)
	}
	for _, secret := range []string{old, fresh, stranger} {
		if strings.Contains(log.String(), secret) || strings.Contains(log.String(), secret[8:]) {
			t.Errorf("the log has a token: %s", &log)
		}
	}
	if got := testutil.ToFloat64(a.metrics.refused.WithLabelValues(refusedUnauthorized)); got != 9 {
		t.Errorf("%v counted, want 9", got)
	}
}

// What the file says counts once it is read again; a faulty file changes nothing and is told of once.
func TestTokensReload(t *testing.T) {
	first, firstLine := newToken(t, "a")
	second, secondLine := newToken(t, "b")
	name := tokenFile(t, firstLine)
	tokens, err := LoadTokens(name)
	if err != nil {
		t.Fatal(err)
	}
	for i, tt := range []struct {
		text    string
		changed bool
		says    string // the error
		valid   string
		invalid string
	}{
		{firstLine, false, "", first, second},
		{firstLine + "\n" + secondLine, true, "", second, "x"},
		{secondLine + "\r\n", true, "", second, first},
		{"b 12ab", false, "line 1: the hash of b is not SHA-256", second, first},
		{"b 12ab", false, "", second, first},
		{"# nobody\n", false, "there is no token", second, first},
		{secondLine + "\nb\n", false, "line 2 is not a name", second, first},
		{"b b " + secondLine, false, "line 1 is not a name", second, first},
		{strings.Replace(secondLine, "b ", `b" `, 1), false, "line 1 is not a name", second, first},
		{secondLine + "0", false, "line 1: the hash", second, first},
		{"b " + strings.Repeat("z", 64), false, "line 1: the hash", second, first},
		{strings.Repeat("#", maxTokenFile+1), false, "allowed are", second, first},
		{firstLine, true, "", first, second},
	} {
		if err := os.WriteFile(name, []byte(tt.text), 0o600); err != nil {
			t.Fatal(err)
		}
		changed, err := tokens.Reload()
		if changed != tt.changed || (err != nil) != (tt.says != "") || err != nil && !strings.Contains(err.Error(), tt.says) {
			t.Errorf("step %d: %v, %v; want %v, %q", i, changed, err, tt.changed, tt.says)
		}
		if tokens.owner(tt.valid) == "" || tokens.owner(tt.invalid) != "" {
			t.Errorf("step %d: %q, %q", i, tokens.owner(tt.valid), tokens.owner(tt.invalid))
		}
	}
	if err := os.Remove(name); err != nil {
		t.Fatal(err)
	}
	if _, err := tokens.Reload(); err == nil || tokens.owner(first) != "a" {
		t.Errorf("without the file: %v, %q", err, tokens.owner(first))
	}
	if _, err := LoadTokens(name); err == nil {
		t.Error("a service without its tokens would start")
	}
	if _, _, err := NewToken("quoting tool"); err == nil {
		t.Error("a name with a space would not be read again")
	}
}

// Browsers may read answers where a script's origin is listed, and send what needs to be asked for before.
func TestOrigins(t *testing.T) {
	origins, err := ParseOrigins("https://quotes.example, http://localhost:3000")
	if err != nil {
		t.Fatal(err)
	}
	tokens, err := LoadTokens(tokenFile(t, "a "+strings.Repeat("0", 64)))
	if err != nil {
		t.Fatal(err)
	}
	a := newAPI(t, func(o *Options) { o.Origins, o.Tokens = origins, tokens })
	preflight := func(origin, method string) *httptest.ResponseRecorder {
		r := httptest.NewRequest("OPTIONS", "/v1/cycles", nil)
		r.Header.Set("Origin", origin)
		r.Header.Set("Access-Control-Request-Method", method)
		return serve(a.Handler(), r)
	}
	w := preflight("https://quotes.example", "POST")
	h := w.Header()
	if w.Code != 204 || h.Get("Access-Control-Allow-Origin") != "https://quotes.example" || !strings.Contains(h.Get("Access-Control-Allow-Methods"), "POST") ||
		!strings.Contains(h.Get("Access-Control-Allow-Headers"), "Authorization") || h.Get("Access-Control-Allow-Credentials") != "" || !strings.Contains(fmt.Sprint(h["Vary"]), "Origin") {
		t.Errorf("%d %v", w.Code, h)
	}
	for _, origin := range []string{"https://quotes.example.attacker.example", "https://attacker.example", "null", "http://quotes.example"} {
		if w := preflight(origin, "POST"); w.Code == 204 || w.Header().Get("Access-Control-Allow-Origin") != "" {
			t.Errorf("%s: %d %v", origin, w.Code, w.Header())
		}
	}
	// A refusal can be read as well: a script should be able to tell its user why.
	w = withHeaders(t, a.Handler(), "GET", stateOfR32, "Origin", "http://localhost:3000")
	if w.Code != 401 || w.Header().Get("Access-Control-Allow-Origin") != "http://localhost:3000" || !strings.Contains(w.Header().Get("Access-Control-Expose-Headers"), "ETag") {
		t.Errorf("%d %v", w.Code, w.Header())
	}
	// Off by default.
	w = withHeaders(t, testHandler(t), "GET", stateOfR32, "Origin", "http://localhost:3000")
	if w.Header().Get("Access-Control-Allow-Origin") != "" || w.Header().Get("Cross-Origin-Resource-Policy") != "same-site" {
		t.Errorf("%v", w.Header())
	}
	all := newAPI(t, func(o *Options) { o.Origins = []string{"*"} })
	if w := withHeaders(t, all.Handler(), "GET", stateOfR32, "Origin", "https://anywhere.example"); w.Header().Get("Access-Control-Allow-Origin") == "" {
		t.Errorf("%v", w.Header())
	}
	for _, bad := range []string{"quotes.example", "https://quotes.example/", "ftp://quotes.example", "https://", "https://a.example https://b.example", "https://user@a.example"} {
		if _, err := ParseOrigins(bad); err == nil {
			t.Errorf("%q passes for an origin", bad)
		}
	}
	if list, err := ParseOrigins(" "); err != nil || list != nil {
		t.Errorf("nothing: %v, %v", list, err)
	}
}

func TestSecureHeaders(t *testing.T) {
	for _, path := range []string{"/livez", "/v1/refrigerants", "/nowhere"} {
		h := withHeaders(t, testHandler(t), "GET", path).Header()
		if h.Get("X-Content-Type-Options") != "nosniff" || !strings.Contains(h.Get("Content-Security-Policy"), "default-src 'none'") || h.Get("Strict-Transport-Security") != "" {
			t.Errorf("%s: %v", path, h)
		}
	}
	r := httptest.NewRequest("GET", "https://localhost/livez", nil) // as over TLS
	if h := serve(testHandler(t), r).Header(); h.Get("Strict-Transport-Security") == "" {
		t.Errorf("over TLS: %v", h)
	}
}

// Each client has a bucket: by its token, or else by its address, which a proxy tells only if it is trusted.
func TestRateLimit(t *testing.T) {
	now := time.Unix(0, 0)
	a := newAPI(t, func(o *Options) {
		o.Rate, o.Burst = 0.5, 2
		o.Now = func() time.Time { return now }
		o.TrustedProxies = []string{"192.0.2.1"}
	})
	get := func(remote, forwarded string) *httptest.ResponseRecorder {
		r := httptest.NewRequestWithContext(t.Context(), "GET", stateOfR32, nil)
		r.RemoteAddr = remote
		if forwarded != "" {
			r.Header.Set("X-Forwarded-For", forwarded)
		}
		return ask(t, a.Handler(), r)
	}
	for i, tt := range []struct {
		pass              time.Duration
		remote, forwarded string
		status            int
	}{
		{0, "198.51.100.1:1000", "", 200},
		{0, "198.51.100.1:1001", "", 200}, // another connection of the same client
		{0, "198.51.100.1:1002", "", 429},
		{0, "198.51.100.1:1002", "203.0.113.5", 429}, // anybody can say that
		{0, "198.51.100.2:1000", "", 200},
		{time.Second, "198.51.100.1:1000", "", 429},
		{time.Second, "198.51.100.1:1000", "", 200},
		{0, "198.51.100.1:1000", "", 429},
		{0, "192.0.2.1:80", "203.0.113.5", 200},
		{0, "192.0.2.1:80", "203.0.113.6", 200},
		{0, "192.0.2.1:80", "203.0.113.5", 200},
		{0, "192.0.2.1:80", "203.0.113.5", 429},
		{0, "[2001:db8::1]:80", "", 200},
		{0, "[2001:db8::2]:80", "", 200},
		{0, "[2001:db8::3]:80", "", 429}, // the same network
		{0, "[2001:db8:0:1::3]:80", "", 200},
		{time.Hour, "198.51.100.1:1000", "", 200}, // a pause does not save up more than the burst
		{0, "198.51.100.1:1000", "", 200},
		{0, "198.51.100.1:1000", "", 429},
	} {
		now = now.Add(tt.pass)
		w := get(tt.remote, tt.forwarded)
		if w.Code != tt.status {
			t.Errorf("step %d: %d, want %d", i, w.Code, tt.status)
		}
		if wait := w.Header().Get("Retry-After"); w.Code == 429 && (wait != "2" && wait != "1" || problemOf(t, w).Type != "/problems/rate-limit") {
			t.Errorf("step %d: Retry-After %q, %s", i, wait, w.Body)
		}
	}
	r := httptest.NewRequest("GET", "/livez", nil)
	r.RemoteAddr = "198.51.100.1:1000"
	if w := serve(a.Handler(), r); w.Code != 200 {
		t.Errorf("a probe: %d", w.Code)
	}
}

// The memory for clients has a bound, and those that keep asking keep their bucket.
func TestRateLimitForgets(t *testing.T) {
	r := newRates(1, 1)
	now := time.Unix(0, 0)
	if r.take("busy", now) != 0 {
		t.Fatal("the first request has to wait")
	}
	for i := range 5 * maxClients {
		r.take(strconv.Itoa(i), now)
		if i%1000 == 0 && r.take("busy", now) == 0 {
			t.Fatalf("forgotten after %d others", i)
		}
		if n := len(r.young) + len(r.aged); n > maxClients+1 {
			t.Fatalf("%d clients", n)
		}
	}
}
