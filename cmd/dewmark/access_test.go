package main

import (
	"bufio"
	"bytes"
	"context"
	"crypto/ecdsa"
	"crypto/elliptic"
	"crypto/rand"
	"crypto/tls"
	"crypto/x509"
	"crypto/x509/pkix"
	"encoding/json"
	"encoding/pem"
	"io"
	"log/slog"
	"math/big"
	"net"
	"net/http"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"testing/synctest"
	"time"
)

// pair writes a new certificate for localhost and its key, and returns its serial number.
func pair(t *testing.T, certFile, keyFile string, serial int64) {
	t.Helper()
	key, err := ecdsa.GenerateKey(elliptic.P256(), rand.Reader)
	if err != nil {
		t.Fatal(err)
	}
	template := &x509.Certificate{
		SerialNumber: big.NewInt(serial), Subject: pkix.Name{CommonName: "localhost"}, DNSNames: []string{"localhost"},
		NotBefore: time.Unix(0, 0), NotAfter: time.Now().AddDate(1, 0, 0),
	}
	cert, err := x509.CreateCertificate(rand.Reader, template, template, key.Public(), key)
	if err != nil {
		t.Fatal(err)
	}
	der, err := x509.MarshalPKCS8PrivateKey(key)
	if err != nil {
		t.Fatal(err)
	}
	for name, block := range map[string]*pem.Block{certFile: {Type: "CERTIFICATE", Bytes: cert}, keyFile: {Type: "PRIVATE KEY", Bytes: der}} {
		if err := os.WriteFile(name, pem.EncodeToMemory(block), 0o600); err != nil {
			t.Fatal(err)
		}
	}
}

// What a client sees of the certificate is what the files held at the last look, also while only one of them is new.
func TestCertificateReload(t *testing.T) {
	dir := t.TempDir()
	certFile, keyFile := filepath.Join(dir, "cert"), filepath.Join(dir, "key")
	pair(t, certFile, keyFile, 1)
	c, err := loadCertificate(certFile, keyFile)
	if err != nil {
		t.Fatal(err)
	}
	serial := func() int64 {
		client, server := net.Pipe()
		defer client.Close()
		go func() { _ = tls.Server(server, c.config()).Handshake() }()
		conn := tls.Client(client, &tls.Config{InsecureSkipVerify: true})
		if err := conn.Handshake(); err != nil {
			t.Fatal(err)
		}
		return conn.ConnectionState().PeerCertificates[0].SerialNumber.Int64()
	}
	if got := serial(); got != 1 {
		t.Errorf("serial number %d, want 1", got)
	}
	if changed, err := c.Reload(); changed || err != nil {
		t.Errorf("unchanged files: %v, %v", changed, err)
	}
	pair(t, certFile, filepath.Join(dir, "next"), 2)
	if changed, err := c.Reload(); changed || err == nil || serial() != 1 {
		t.Errorf("half renewed: %v, %v, serial number %d", changed, err, serial())
	}
	if err := os.Rename(filepath.Join(dir, "next"), keyFile); err != nil {
		t.Fatal(err)
	}
	if changed, err := c.Reload(); !changed || err != nil || serial() != 2 {
		t.Errorf("renewed: %v, %v, serial number %d", changed, err, serial())
	}
	if err := os.Remove(certFile); err != nil {
		t.Fatal(err)
	}
	if _, err := c.Reload(); err == nil || serial() != 2 {
		t.Errorf("removed: %v, serial number %d", err, serial())
	}
}

// scripted reloads as told.
type scripted struct {
	changed []bool
	errs    []error
}

func (s *scripted) Reload() (changed bool, err error) {
	if len(s.changed) == 0 {
		return false, nil
	}
	changed, err = s.changed[0], s.errs[0]
	s.changed, s.errs = s.changed[1:], s.errs[1:]
	return changed, err
}

// The log tells of changes, and of a failure once.
func TestWatch(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		ctx, cancel := context.WithCancel(t.Context())
		var log bytes.Buffer
		s := &scripted{changed: []bool{false, true, false, false, false, true}, errs: []error{nil, nil, io.EOF, io.EOF, io.ErrClosedPipe, nil}}
		go watch(ctx, slog.New(slog.NewJSONHandler(&log, nil)), "tokens", s)
		time.Sleep(10 * lookEvery)
		cancel()
		synctest.Wait()
		var got []string
		for lines := bufio.NewScanner(&log); lines.Scan(); {
			var record struct{ Msg, What, Err string }
			if err := json.Unmarshal(lines.Bytes(), &record); err != nil || record.What != "tokens" {
				t.Errorf("%s: %v", lines.Text(), err)
			}
			got = append(got, strings.TrimSpace(record.Msg+" "+record.Err))
		}
		if want := "reloaded, not reloaded EOF, not reloaded io: read/write on closed pipe, reloaded"; strings.Join(got, ", ") != want {
			t.Errorf("%q, want %q", got, want)
		}
	})
}

// A service that anybody could reach and anybody could use does not start by accident.
func TestPublicAddress(t *testing.T) {
	dir := t.TempDir()
	tokens, cert, key := filepath.Join(dir, "tokens"), filepath.Join(dir, "cert"), filepath.Join(dir, "key")
	if err := os.WriteFile(tokens, []byte("a "+strings.Repeat("0", 64)), 0o600); err != nil {
		t.Fatal(err)
	}
	pair(t, cert, key, 1)
	for _, tt := range []struct {
		name, address string
		access        access
		says          string // the refusal
		warns         string
	}{
		{"loopback", "127.0.0.1", access{}, "", ""},
		{"loopback of IPv6", "::1", access{}, "", ""},
		{"all of 127", "127.1.2.3", access{}, "", ""},
		{"all interfaces", "0.0.0.0", access{}, "--open", ""},
		{"all interfaces of IPv6", "::", access{}, "--open", ""},
		{"one interface", "192.0.2.1", access{}, "--open", ""},
		{"said to be open", "0.0.0.0", access{open: true}, "", ""},
		{"tokens", "0.0.0.0", access{tokenFile: tokens}, "", "unencrypted"},
		{"TLS", "0.0.0.0", access{tlsCert: cert, tlsKey: key}, "", "may call"},
		{"both", "0.0.0.0", access{tokenFile: tokens, tlsCert: cert, tlsKey: key}, "", ""},
	} {
		var log bytes.Buffer
		g, err := tt.access.load(t.Context(), slog.New(slog.DiscardHandler))
		if err != nil {
			t.Fatal(err)
		}
		err = g.admits(&net.TCPAddr{IP: net.ParseIP(tt.address), Port: 8080}, slog.New(slog.NewTextHandler(&log, nil)))
		if (err != nil) != (tt.says != "") || err != nil && !strings.Contains(err.Error(), tt.says) {
			t.Errorf("%s: %v", tt.name, err)
		}
		if (log.Len() > 0) != (tt.warns != "") || !strings.Contains(log.String(), tt.warns) {
			t.Errorf("%s: log %q", tt.name, &log)
		}
	}
	for _, args := range [][]string{
		{"--listen", "0.0.0.0:0"},
		{"--tls-cert", cert},
		{"--tls-cert", cert, "--tls-key", tokens},
		{"--token-file", cert},
		{"--token-file", filepath.Join(dir, "none")},
		{"--cors-origin", "example"},
		{"--trusted-proxies", "here"},
		{"--rate", "-1"},
		{"--rate", "NaN"},
	} {
		code, _, stderr := command(t, "", append([]string{"serve", "--admin-listen", ""}, args...)...)
		if code != 2 || !strings.Contains(stderr, "dewmark: ") {
			t.Errorf("%v: exit %d, %s", args, code, stderr)
		}
	}
}

// running starts the service with args and returns its address once it is ready. What it logs later goes nowhere.
func running(t *testing.T, args ...string) (address string, stop func() int) {
	t.Helper()
	ctx, cancel := context.WithCancel(t.Context())
	logs, stderr := io.Pipe()
	exit := make(chan int, 1)
	go func() {
		exit <- run(ctx, append([]string{"serve", "--listen", "127.0.0.1:0", "--admin-listen", ""}, args...), nil, nil, stderr)
		stderr.Close()
	}()
	ready := make(chan string, 1)
	go func() {
		defer close(ready)
		for lines := bufio.NewScanner(logs); lines.Scan(); {
			var record struct{ Msg, Address string }
			if json.Unmarshal(lines.Bytes(), &record) != nil {
				t.Errorf("not a record: %s", lines.Text())
			}
			switch record.Msg {
			case "listening":
				address = record.Address
			case "ready":
				ready <- address
			}
		}
	}()
	if address = <-ready; address == "" {
		t.Fatalf("exit %d", <-exit)
	}
	return address, func() int {
		cancel()
		return <-exit
	}
}

// A client with a token of the file and trust in the certificate gets its answer; the probe needs neither.
func TestServeWithTokensAndTLS(t *testing.T) {
	dir := t.TempDir()
	tokens, cert, key := filepath.Join(dir, "tokens"), filepath.Join(dir, "cert"), filepath.Join(dir, "key")
	code, line, shown := command(t, "", "token", "quoting")
	token := shown[strings.LastIndex(shown, " ")+1 : len(shown)-1]
	if code != 0 || strings.Contains(line, token) || !strings.HasPrefix(line, "quoting ") {
		t.Fatalf("exit %d: %q, %q", code, line, shown)
	}
	if err := os.WriteFile(tokens, []byte(line), 0o600); err != nil {
		t.Fatal(err)
	}
	pair(t, cert, key, 7)
	address, stop := running(t, "--token-file", tokens, "--tls-cert", cert, "--tls-key", key)
	client := &http.Client{Transport: &http.Transport{TLSClientConfig: &tls.Config{InsecureSkipVerify: true}, ForceAttemptHTTP2: true}}
	defer client.CloseIdleConnections()
	for authorization, want := range map[string]int{"Bearer " + token: 200, "": 401} {
		r, err := http.NewRequestWithContext(t.Context(), http.MethodGet, "https://"+address+"/v1/states?refrigerant=R290&temperature=5&pressure=400", http.NoBody)
		if err != nil {
			t.Fatal(err)
		}
		r.Header.Set("Authorization", authorization)
		answer, err := client.Do(r)
		if err != nil {
			t.Fatal(err)
		}
		answer.Body.Close()
		if answer.StatusCode != want || answer.ProtoMajor != 2 || answer.Header.Get("Strict-Transport-Security") == "" || answer.TLS.PeerCertificates[0].SerialNumber.Int64() != 7 {
			t.Errorf("%d %s %v", answer.StatusCode, answer.Proto, answer.Header)
		}
	}
	if code, _, stderr := command(t, "", "probe", "--listen", address, "--tls-cert", cert); code != 0 {
		t.Errorf("probe: exit %d, %s", code, stderr)
	}
	if code, _, _ := command(t, "", "probe", "--listen", address); code != 1 {
		t.Errorf("probe without TLS: exit %d", code)
	}
	client.CloseIdleConnections()
	if code := stop(); code != 0 {
		t.Errorf("exit %d", code)
	}
	if code, _, stderr := command(t, "", "token", "a b"); code != 2 || !strings.Contains(stderr, "is no name") {
		t.Errorf("exit %d, %s", code, stderr)
	}
}

// What runs at the signal is finished within the time to drain, and what is not is cut off; the service ends in order
// either way.
func TestDrain(t *testing.T) {
	for name, finishes := range map[string]bool{"finished": true, "cut off": false} {
		t.Run(name, func(t *testing.T) {
			drain := "30s"
			if !finishes {
				drain = "100ms"
			}
			address, stop := running(t, "--drain", drain)
			c, err := net.Dial("tcp", address)
			if err != nil {
				t.Fatal(err)
			}
			defer c.Close()
			const line = `{"refrigerant": "R290", "properties": ["temperature"]}` + "\n"
			if _, err := io.WriteString(c, "POST /v1/states HTTP/1.1\r\nHost: localhost\r\nContent-Type: application/x-ndjson\r\nTransfer-Encoding: chunked\r\n\r\n37\r\n"+line+"\r\n"); err != nil {
				t.Fatal(err)
			}
			answer, err := http.ReadResponse(bufio.NewReader(c), nil) // the stream is under way
			if err != nil {
				t.Fatal(err)
			}
			exit := make(chan int, 1)
			go func() { exit <- stop() }()
			if finishes {
				for { // until nobody is let in any more
					other, err := net.Dial("tcp", address)
					if err != nil {
						break
					}
					other.Close()
				}
				if _, err := io.WriteString(c, "23\r\n"+`{"temperature": 5, "pressure": 400}`+"\r\n0\r\n\r\n"); err != nil {
					t.Error(err)
				}
			}
			body, err := io.ReadAll(answer.Body)
			if whole := err == nil && string(body) == `{"phase":"vapour","temperature":5}`+"\n"; whole != finishes {
				t.Errorf("%q, %v", body, err)
			}
			if code := <-exit; code != 0 {
				t.Errorf("exit %d", code)
			}
		})
	}
}
