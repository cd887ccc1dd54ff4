package main

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"time"
)

// load is what wrk says of one run.
type load struct {
	Requests int     `json:"requests"`
	Seconds  float64 `json:"seconds"`
	Errors   int     `json:"errors"` // transport errors and other answers than 2xx and 3xx
	P50      float64 `json:"p50"`    // s
	P99      float64 `json:"p99"`
}

// wrkScript makes wrk send a question and print its summary as JSON.
const wrkScript = `wrk.method = "POST"
wrk.headers["Content-Type"] = "application/json"
wrk.body = [==[%s]==]
function done(summary, latency, requests)
  local e = summary.errors
  io.write(string.format('\n{"requests": %%d, "seconds": %%f, "errors": %%d, "p50": %%f, "p99": %%f}\n', summary.requests,
    summary.duration / 1e6, e.connect + e.read + e.write + e.status + e.timeout, latency:percentile(50) / 1e6, latency:percentile(99) / 1e6))
end
`

// wrk asks the same question over some connections, each as soon as the answer before is there.
func (s *settings) wrk(ctx context.Context, address string, q *question, connections int, duration time.Duration) (load, error) {
	folder, err := os.MkdirTemp("", "dewmark-loadtest-")
	if err != nil {
		return load{}, err
	}
	defer os.RemoveAll(folder)
	script := filepath.Join(folder, "question.lua")
	if err := os.WriteFile(script, fmt.Appendf(nil, wrkScript, q.body), 0o600); err != nil {
		return load{}, err
	}
	args := []string{"wrk", "--threads", "1", "--connections", strconv.Itoa(connections), "--duration", strconv.FormatFloat(max(1, duration.Round(time.Second).Seconds()), 'f', 0, 64) + "s", "--script", script, "http://" + address + q.path}
	if s.clientCPUs != "" {
		args = append([]string{"taskset", "-c", s.clientCPUs}, args...)
	}
	ctx, cancel := context.WithTimeout(ctx, duration+30*time.Second)
	defer cancel()
	out, err := exec.CommandContext(ctx, args[0], args[1:]...).CombinedOutput() //nolint:gosec // a fixed program
	if err != nil {
		return load{}, fmt.Errorf("wrk: %w\n%s", err, out)
	}
	var l load
	if err := json.Unmarshal(out[max(0, bytes.LastIndexByte(out, '{')):], &l); err != nil {
		return l, fmt.Errorf("wrk: %w\n%s", err, out)
	}
	if l.Requests == 0 {
		return l, fmt.Errorf("wrk had no answer\n%s", out)
	}
	return l, nil
}

// measured is a load and what it cost the service.
type measured struct {
	load
	cpu time.Duration // of the service, user and system, for one request
}

// measure puts a load on a service and reads its processor time before and after.
func (s *settings) measure(ctx context.Context, p *service, q *question, connections int) (measured, error) {
	before, err := cpuTime(p.pid())
	if err != nil {
		return measured{}, err
	}
	l, err := s.wrk(ctx, p.address, q, connections, s.time)
	if err != nil {
		return measured{}, err
	}
	after, err := cpuTime(p.pid())
	return measured{l, (after - before) / time.Duration(l.Requests)}, err
}
