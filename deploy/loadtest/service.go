package main

import (
	"bufio"
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"net/http"
	"os/exec"
	"strconv"
	"strings"
	"sync"
	"syscall"
	"time"
)

// service is a process that answers HTTP: dewmark, or the bare route that it is compared with.
type service struct {
	cmd     *exec.Cmd
	began   time.Time
	address string // of the clients
	admin   string // of the metrics; empty for the bare route
	exited  chan struct{}
	exit    error // once exited is closed
	log     logTail
}

// logTail keeps the last lines of a log.
type logTail struct {
	mu    sync.Mutex
	lines []string
}

func (l *logTail) add(line string) {
	l.mu.Lock()
	defer l.mu.Unlock()
	l.lines = append(l.lines, line)
	l.lines = l.lines[max(0, len(l.lines)-10):]
}

func (l *logTail) String() string {
	l.mu.Lock()
	defer l.mu.Unlock()
	return strings.Join(l.lines, "\n")
}

// launch says how to start dewmark.
type launch struct {
	address string    // default: any free port
	admin   string    // default: any free port
	files   int       // limit of file descriptors; default: as it is
	stderr  io.Writer // default: read here, for the addresses; otherwise address and admin must be given
	args    []string
}

// anyPort lets the kernel choose.
const anyPort = "127.0.0.1:0"

// start starts the service and waits until it listens.
func (s *settings) start(ctx context.Context, l launch) (*service, error) {
	address, admin := l.address, l.admin
	if address == "" {
		address, admin = anyPort, anyPort
	}
	args := append([]string{s.binary, "serve", "--listen", address, "--admin-listen", admin}, l.args...)
	if l.files > 0 {
		args = append([]string{"prlimit", fmt.Sprintf("--nofile=%d:%d", l.files, l.files)}, args...)
	}
	return s.launch(ctx, args, l)
}

// launch runs a command on the cores of the service and waits until its log names the addresses.
func (s *settings) launch(ctx context.Context, args []string, l launch) (*service, error) {
	if s.serverCPUs != "" {
		args = append([]string{"taskset", "-c", s.serverCPUs}, args...)
	}
	// taskset and prlimit become the service, so that its number is theirs.
	p := &service{cmd: exec.Command(args[0], args[1:]...), exited: make(chan struct{})} //nolint:gosec,noctx // our own binary; it must outlive a cancelled context to end in peace
	p.cmd.Stderr = l.stderr
	var logs io.Reader
	if l.stderr == nil {
		pipe, err := p.cmd.StderrPipe()
		if err != nil {
			return nil, err
		}
		logs = pipe
	}
	p.began = time.Now()
	if err := p.cmd.Start(); err != nil {
		return nil, err
	}
	listening := make(chan struct{})
	read := make(chan struct{})
	go func() {
		defer close(read)
		if logs != nil {
			p.follow(logs, listening)
		}
	}()
	go func() {
		<-read // Wait would close the pipe under the reader
		p.exit = p.cmd.Wait()
		close(p.exited)
	}()
	if logs == nil {
		p.address, p.admin = l.address, l.admin
		return p, p.await(ctx, "/livez", 10*time.Second)
	}
	select {
	case <-listening:
		return p, nil
	case <-p.exited:
		return nil, fmt.Errorf("the service ended: %w\n%s", p.exit, &p.log)
	case <-time.After(30 * time.Second):
		p.kill()
		return nil, fmt.Errorf("the service does not listen\n%s", &p.log)
	}
}

// follow reads the log, in which the service tells its addresses.
func (p *service) follow(logs io.Reader, listening chan<- struct{}) {
	heard := false
	for lines := bufio.NewScanner(logs); lines.Scan(); {
		p.log.add(lines.Text())
		var record struct{ Msg, Address string }
		if heard || json.Unmarshal(lines.Bytes(), &record) != nil { // a slow reader of the log would slow the service
			continue
		}
		switch record.Msg {
		case "metrics":
			p.admin = record.Address
		case "listening":
			p.address = record.Address
			heard = true
			close(listening)
		}
	}
}

func (p *service) pid() int { return p.cmd.Process.Pid }

// stop asks the service to end and returns how it did.
func (p *service) stop(patience time.Duration) error {
	_ = p.cmd.Process.Signal(syscall.SIGTERM)
	select {
	case <-p.exited:
		return p.exit
	case <-time.After(patience):
		p.kill()
		return errors.New("the service did not end in time")
	}
}

func (p *service) kill() {
	_ = p.cmd.Process.Kill()
	<-p.exited
}

// end stops a service at the end of a measurement.
func (p *service) end(r *report) {
	if err := p.stop(40 * time.Second); err != nil {
		r.fail("the service ended badly: %v\n%s", err, &p.log)
	}
}

// await asks until a path answers 200.
func (p *service) await(ctx context.Context, path string, patience time.Duration) error {
	client := http.Client{Transport: &http.Transport{DisableKeepAlives: true}, Timeout: time.Second}
	var last error
	for begun := time.Now(); time.Since(begun) < patience && ctx.Err() == nil; time.Sleep(time.Millisecond) {
		r, err := http.NewRequestWithContext(ctx, http.MethodGet, "http://"+p.address+path, http.NoBody)
		if err != nil {
			return err
		}
		answer, err := client.Do(r)
		if err != nil {
			last = err
			continue
		}
		_ = answer.Body.Close()
		if answer.StatusCode == http.StatusOK {
			return nil
		}
		last = errors.New(answer.Status)
	}
	return fmt.Errorf("%s is not to be had: %w", path, errors.Join(last, ctx.Err()))
}

// quiet waits until the service is ready and no longer busy with preparations.
func (p *service) quiet(ctx context.Context) error {
	if err := p.await(ctx, "/readyz", 30*time.Second); err != nil {
		return err
	}
	const interval = 500 * time.Millisecond
	before, err := cpuTime(p.pid())
	for begun := time.Now(); err == nil && ctx.Err() == nil; {
		time.Sleep(interval)
		var now time.Duration
		if now, err = cpuTime(p.pid()); now-before < interval/20 {
			return err
		}
		before = now
		if time.Since(begun) > time.Minute {
			return errors.New("the service is busy for a minute without a request")
		}
	}
	return errors.Join(err, ctx.Err())
}

// metric returns the sum of all series of a name.
func (p *service) metric(ctx context.Context, name string) (float64, error) {
	r, err := http.NewRequestWithContext(ctx, http.MethodGet, "http://"+p.admin+"/metrics", http.NoBody)
	if err != nil {
		return 0, err
	}
	client := http.Client{Transport: &http.Transport{DisableKeepAlives: true}, Timeout: 10 * time.Second}
	answer, err := client.Do(r)
	if err != nil {
		return 0, err
	}
	defer answer.Body.Close()
	text, err := io.ReadAll(answer.Body)
	if err != nil {
		return 0, err
	}
	sum, found := 0.0, false
	for line := range bytes.Lines(text) {
		rest, ok := strings.CutPrefix(string(line), name)
		if !ok || rest[0] != ' ' && rest[0] != '{' {
			continue
		}
		x, err := strconv.ParseFloat(strings.Fields(rest[strings.LastIndexByte(rest, '}')+1:])[0], 64)
		if err != nil {
			return 0, err
		}
		sum, found = sum+x, true
	}
	if !found {
		return 0, fmt.Errorf("there is no metric %s", name)
	}
	return sum, nil
}
