package main

import (
	"bufio"
	"bytes"
	"context"
	"encoding/json"
	"flag"
	"io"
	"net/http"
	"reflect"
	"strings"
	"testing"
	"time"

	"dewmark/api"
)

// command runs a command line.
func command(t *testing.T, stdin string, args ...string) (code int, stdout, stderr string) {
	t.Helper()
	var out, errs bytes.Buffer
	code = run(t.Context(), args, io.MultiReader(strings.NewReader(stdin)), &out, &errs) // of no known length, like a pipe
	return code, out.String(), errs.String()
}

func TestCall(t *testing.T) {
	for _, tt := range []struct {
		name  string
		stdin string
		args  []string
		code  int
		says  string
	}{
		{"good", `{"refrigerant": "R290", "points": [{"temperature": 5, "pressure": 400}]}`, []string{"POST", "/v1/states"}, 0, `"phase":"vapour","temperature":5,"pressure":400,`},
		{"read", "", []string{"get", "/v1/refrigerants/R290?system=IP"}, 0, `"designation":"R290"`},
		{"table", `{"refrigerant": "R290", "temperatures": [0]}`, []string{"--accept", "text/csv", "POST", "/v1/saturation"}, 0, "refrigerant,datum,temperature (Cel)"},
		{"stream", "{\"refrigerant\": \"R290\"}\n{\"temperature\": 5, \"pressure\": 400}\n", []string{"--content-type", "application/x-ndjson", "POST", "/v1/states"}, 0, `{"phase":"vapour",`},
		{"refused", `{`, []string{"POST", "/v1/cycles"}, 1, `"type":"/problems/malformed-json"`},
		{"impossible", `{"refrigerant": "R290", "evaporation": {"temperature": 0}, "condensation": {"temperature": 97}}`, []string{"POST", "/v1/cycles"}, 1, `"code":"above_critical"`},
		{"no such path", "", []string{"GET", "/v3"}, 1, `"status":404`},
		{"not ready", "", []string{"GET", "/readyz"}, 2, `"status":503`},
		{"limit", `{"refrigerant": "R290", "points": [{}, {}]}`, []string{"--max-points", "1", "POST", "/v1/states"}, 1, "allowed are 1 at most"},
		{"head", "", []string{"HEAD", "/livez"}, 0, ""},
	} {
		code, stdout, stderr := command(t, tt.stdin, append([]string{"call"}, tt.args...)...)
		if code != tt.code || !strings.Contains(stdout, tt.says) || stderr != "" || tt.says == "" && stdout != "" {
			t.Errorf("%s: exit %d, %.300s, %s", tt.name, code, stdout, stderr)
		}
	}
}

func TestUsage(t *testing.T) {
	for _, tt := range []struct {
		args []string
		code int
		says string // on standard error
	}{
		{[]string{"call"}, 2, "Usage: dewmark call [flags] METHOD PATH"},
		{[]string{"call", "GET", "livez"}, 2, "must begin with /"},
		{[]string{"call", "G T", "/livez"}, 2, "invalid method"},
		{[]string{"call", "--frob", "GET", "/livez"}, 2, "not defined: -frob"},
		{[]string{"call", "--help"}, 0, "DEWMARK_CONTENT_TYPE"},
		{[]string{"serve", "extra"}, 2, "takes 0 operands"},
		{[]string{"serve", "--help"}, 0, "DEWMARK_ADMIN_LISTEN"},
		{[]string{"--listen", "nonsense"}, 2, "nonsense"},
		{[]string{"--drain", "soon"}, 2, "drain"},
		{[]string{"--log-level", "LOUD"}, 2, "LOUD"},
		{[]string{"--max-points", "-1", "--listen", "127.0.0.1:0"}, 2, "negative"},
		{[]string{"--deadline", "0s"}, 2, "--deadline must be above zero"},
		{[]string{"--max-queue", "0"}, 2, "--max-queue must be above zero"},
		{[]string{"--max-mixtures", "0"}, 2, "--max-mixtures must be above zero"},
		{[]string{"--max-mixtures", "-1"}, 2, "negative"},
		{[]string{"--drain-delay", "-1s"}, 2, "must not be negative"},
		{[]string{"brew"}, 2, `unknown command "brew"`},
		{[]string{"probe", "--listen", "127.0.0.1"}, 1, "missing port"},
		{[]string{"probe", "--listen", "127.0.0.1:1", "--timeout", "1s"}, 1, "127.0.0.1:1"},
	} {
		if code, _, stderr := command(t, "", tt.args...); code != tt.code || !strings.Contains(stderr, tt.says) {
			t.Errorf("%v: exit %d, %s", tt.args, code, stderr)
		}
	}
	if code, stdout, _ := command(t, "", "version"); code != 0 || strings.TrimSpace(stdout) == "" {
		t.Errorf("version: exit %d, %q", code, stdout)
	}
	if code, stdout, _ := command(t, "", "help"); code != 0 || stdout != usage {
		t.Errorf("help: exit %d, %q", code, stdout)
	}
}

// An environment variable stands for a flag, and the flag goes first.
func TestEnvironment(t *testing.T) {
	t.Setenv("DEWMARK_MAX_POINTS", "1")
	const body = `{"refrigerant": "R290", "points": [{"temperature": 5, "pressure": 400}, {"temperature": 5, "pressure": 400}]}`
	if code, stdout, _ := command(t, body, "call", "POST", "/v1/states"); code != 1 || !strings.Contains(stdout, "1 at most") {
		t.Errorf("environment: exit %d, %s", code, stdout)
	}
	if code, stdout, _ := command(t, body, "call", "--max-points", "2", "POST", "/v1/states"); code != 0 {
		t.Errorf("flag: exit %d, %s", code, stdout)
	}
	t.Setenv("DEWMARK_MAX_POINTS", "many")
	if code, _, stderr := command(t, body, "call", "POST", "/v1/states"); code != 2 || !strings.Contains(stderr, `DEWMARK_MAX_POINTS="many"`) {
		t.Errorf("nonsense: exit %d, %s", code, stderr)
	}
}

// Each flag of the load reaches the option that it is named after.
func TestLoadFlags(t *testing.T) {
	var l load
	flags := newFlags("serve", "", io.Discard)
	l.register(flags)
	args := []string{
		"--max-concurrent", "1", "--max-queue", "2", "--max-batches", "3", "--max-streams", "4", "--max-mixtures", "5",
		"--deadline", "6s", "--rate", "7", "--burst", "8", "--trusted-proxies", "192.0.2.1, 198.51.100.0/24",
	}
	if err := parse(flags, args, 0); err != nil {
		t.Fatal(err)
	}
	var got api.Options
	l.apply(&got)
	want := api.Options{
		MaxConcurrent: 1, MaxQueue: 2, MaxBatches: 3, MaxStreams: 4, MaxMixtures: 5,
		Deadline: 6 * time.Second, Rate: 7, Burst: 8, TrustedProxies: []string{"192.0.2.1", "198.51.100.0/24"},
	}
	flags.VisitAll(func(f *flag.Flag) {
		if f.Value.String() == f.DefValue {
			t.Errorf("--%s is not tried", f.Name)
		}
	})
	if !reflect.DeepEqual(got, want) {
		t.Errorf("%+v, want %+v", got, want)
	}
}

// brokenReader breaks off.
type brokenReader struct{ r io.Reader }

func (b brokenReader) Read(p []byte) (int, error) {
	n, err := b.r.Read(p)
	if err == io.EOF {
		err = io.ErrUnexpectedEOF
	}
	return n, err
}

// A stream that breaks off must not look like one that ended.
func TestCallWithBrokenInput(t *testing.T) {
	var out, errs bytes.Buffer
	in := brokenReader{strings.NewReader("{\"refrigerant\": \"R290\"}\n{\"temperature\": 5, \"pressure\": 400}\n")}
	code := run(t.Context(), []string{"call", "--content-type", "application/x-ndjson", "POST", "/v1/states"}, in, &out, &errs)
	if code != 2 || !strings.Contains(errs.String(), "broke off") {
		t.Errorf("exit %d, %s", code, errs.String())
	}
}

// The service answers at once, turns ready, obeys the probe, serves metrics on their own address and ends in peace.
func TestServe(t *testing.T) {
	ctx, stop := context.WithCancel(t.Context())
	defer stop()
	logs, stderr := io.Pipe()
	exit := make(chan int, 1)
	go func() {
		exit <- run(ctx, []string{"--listen", "127.0.0.1:0", "--admin-listen", "127.0.0.1:0"}, nil, nil, stderr)
		stderr.Close()
	}()
	public, admin := make(chan string, 1), make(chan string, 1)
	ready := make(chan struct{})
	go func() {
		for lines := bufio.NewScanner(logs); lines.Scan(); {
			var record struct{ Msg, Address string }
			if err := json.Unmarshal(lines.Bytes(), &record); err != nil {
				t.Errorf("%q: %v", lines.Text(), err)
			}
			switch record.Msg {
			case "listening":
				public <- record.Address
			case "metrics":
				admin <- record.Address
			case "ready":
				close(ready)
			}
		}
	}()
	address := <-public
	get := func(url string) (int, string) {
		answer, err := http.Get(url) //nolint:noctx // a loopback address within a test
		if err != nil {
			t.Fatal(err)
		}
		defer answer.Body.Close()
		body, err := io.ReadAll(answer.Body)
		if err != nil {
			t.Fatal(err)
		}
		return answer.StatusCode, string(body)
	}
	if status, body := get("http://" + address + "/v1/states?refrigerant=R290&temperature=5&pressure=400"); status != 200 || !strings.Contains(body, `"phase":"vapour"`) {
		t.Errorf("%d %s", status, body)
	}
	<-ready
	if code, _, errs := command(t, "", "probe", "--listen", address); code != 0 {
		t.Errorf("probe: exit %d, %s", code, errs)
	}
	_, port, _ := strings.Cut(address, ":")
	if code, _, errs := command(t, "", "probe", "--listen", "0.0.0.0:"+port); code != 0 {
		t.Errorf("probe of all interfaces: exit %d, %s", code, errs)
	}
	if status, body := get("http://" + <-admin + "/metrics"); status != 200 || !strings.Contains(body, "\ndewmark_ready 1\n") {
		t.Errorf("metrics: %d %.500s", status, body)
	}
	stop()
	select {
	case code := <-exit:
		if code != 0 {
			t.Errorf("exit %d", code)
		}
	case <-time.After(30 * time.Second):
		t.Error("the service does not end")
	}
	if code, _, _ := command(t, "", "probe", "--listen", address, "--timeout", "1s"); code != 1 {
		t.Errorf("probe of nobody: exit %d", code)
	}
}
