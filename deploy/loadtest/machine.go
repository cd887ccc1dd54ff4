package main

import (
	"bytes"
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strconv"
	"strings"
	"time"
)

func severalCPUs() bool { return runtime.NumCPU() > 1 }

// build builds the service as the Dockerfile does, in a folder that remove deletes.
func build(ctx context.Context) (binary string, remove func(), err error) {
	folder, err := os.MkdirTemp("", "dewmark-loadtest-")
	if err != nil {
		return "", nil, err
	}
	remove = func() { _ = os.RemoveAll(folder) }
	binary = filepath.Join(folder, "dewmark")
	c := exec.CommandContext(ctx, "go", "build", "-tags", "nomsgpack,validator_novalidatefn", "-trimpath", "-ldflags", "-s -w -buildid= -X main.version=loadtest", "-o", binary, "dewmark/cmd/dewmark") //nolint:gosec // a folder of our own
	c.Env = append(os.Environ(), "CGO_ENABLED=0")
	if out, err := c.CombinedOutput(); err != nil {
		remove()
		return "", nil, fmt.Errorf("build: %w\n%s", err, out)
	}
	return binary, remove, nil
}

// pinSelf keeps this program to the cores of the load generator.
func (s *settings) pinSelf(ctx context.Context) error {
	if s.clientCPUs == "" {
		return nil
	}
	out, err := exec.CommandContext(ctx, "taskset", "-a", "-p", "-c", s.clientCPUs, strconv.Itoa(os.Getpid())).CombinedOutput() //nolint:gosec // the operator's own flag
	if err != nil {
		return fmt.Errorf("taskset: %w: %s", err, out)
	}
	if !strings.ContainsAny(s.clientCPUs, ",-") {
		runtime.GOMAXPROCS(1)
	}
	return nil
}

// clockTick is the unit of processor times in /proc, which Linux fixes for programs.
const clockTick = 10 * time.Millisecond

// cpuTime returns the processor time that a process has used, user and system.
func cpuTime(pid int) (time.Duration, error) {
	text, err := os.ReadFile(fmt.Sprintf("/proc/%d/stat", pid))
	if err != nil {
		return 0, err
	}
	// The second field is the name in parentheses and may contain anything; see proc(5).
	fields := strings.Fields(string(text[bytes.LastIndexByte(text, ')')+1:]))
	user, err := strconv.ParseInt(fields[11], 10, 64) // utime, field 14 of all
	if err != nil {
		return 0, err
	}
	system, err := strconv.ParseInt(fields[12], 10, 64) // stime
	return time.Duration(user+system) * clockTick, err
}

// memory returns a figure of /proc/PID/status in MB, such as VmRSS, RssAnon or VmHWM, the most so far.
func memory(pid int, name string) (float64, error) {
	text, err := os.ReadFile(fmt.Sprintf("/proc/%d/status", pid))
	if err != nil {
		return 0, err
	}
	for line := range strings.Lines(string(text)) {
		if value, ok := strings.CutPrefix(line, name+":"); ok {
			kibibytes, err := strconv.ParseFloat(strings.Fields(value)[0], 64)
			return kibibytes * 1024 / 1e6, err
		}
	}
	return 0, fmt.Errorf("no %s of process %d", name, pid)
}
