// Command loadtest measures a running dewmark and treats it badly, on this machine alone: it starts the service on loopback
// addresses, puts a bounded load on it and stops it. One command makes one part of the table in deploy/README.md:
//
//	go run -tags nomsgpack ./deploy/loadtest cost
//
// It needs Linux, and wrk (Debian's package) for the commands that say so.
package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"os"
	"os/signal"
	"slices"
	"syscall"
	"time"
)

// settings are the flags that all commands share.
type settings struct {
	binary     string        // of the service
	serverCPUs string        // cores that the service may use, as taskset writes them
	clientCPUs string        // cores of the load generator
	time       time.Duration // of one measurement
	rounds     int
	only       string // fault
	verbose    bool
}

// command is one thing to measure.
type command struct {
	name, does string
	time       time.Duration // default of --time; 0 for commands that take as long as they take
	rounds     int           // default of --rounds; 0 for commands without rounds
	run        func(context.Context, *settings) (*report, error)
}

var commands = []command{
	{"cost", "processor time of a state and a cycle, against a bare route of the same middleware (wrk)", 3 * time.Second, 7, cost},
	{"sizing", "processor time of typical requests and how many of them one core serves (wrk)", 3 * time.Second, 3, sizing},
	{"overload", "ten times the capacity, and what it leaves behind (wrk)", 30 * time.Second, 0, overload},
	{"fairness", "time of a single state beside streams of 100 000 points", 10 * time.Second, 0, fairness},
	{"rolling", "restarts of two replicas behind a proxy, under load; --rounds restarts", 0, 20, rolling},
	{"faults", "clients and machines that misbehave", 0, 0, faults},
	{"footprint", "size, start and idle memory", 0, 10, footprint},
}

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	err := run(ctx, os.Args[1:])
	stop()
	if err != nil {
		fmt.Fprintln(os.Stderr, "loadtest:", err)
		os.Exit(1)
	}
}

func run(ctx context.Context, args []string) error {
	if len(args) > 0 && args[0] == "bare" { // this program starts itself so
		return serveBare(ctx, args[1:])
	}
	i := slices.IndexFunc(commands, func(c command) bool { return len(args) > 0 && c.name == args[0] })
	if i < 0 {
		fmt.Fprintln(os.Stderr, "Usage: loadtest COMMAND [flags], with one of")
		for _, c := range commands {
			fmt.Fprintf(os.Stderr, "  %-10s %s\n", c.name, c.does)
		}
		return errors.New("no such command")
	}
	c := commands[i]
	s := settings{serverCPUs: "0", clientCPUs: "1"}
	if !severalCPUs() {
		s.clientCPUs = "0"
	}
	flags := flag.NewFlagSet(c.name, flag.ContinueOnError)
	flags.StringVar(&s.binary, "binary", "", "`file` of the service; built from the sources by default")
	flags.StringVar(&s.serverCPUs, "server-cpus", s.serverCPUs, "`cores` of the service, as taskset lists them; empty for all")
	flags.StringVar(&s.clientCPUs, "client-cpus", s.clientCPUs, "`cores` of the load generator; empty for all")
	flags.DurationVar(&s.time, "time", c.time, "`time` of one measurement")
	flags.IntVar(&s.rounds, "rounds", c.rounds, "`number` of repetitions")
	flags.StringVar(&s.only, "only", "", "`name` of the one fault to run")
	flags.BoolVar(&s.verbose, "v", false, "tell what happens meanwhile")
	if err := flags.Parse(args[1:]); err != nil {
		return err
	}
	if s.time > 10*time.Minute || s.rounds > 1000 {
		return errors.New("a measurement is bounded by ten minutes and a thousand rounds")
	}
	if s.binary == "" {
		built, remove, err := build(ctx)
		if err != nil {
			return err
		}
		defer remove()
		s.binary = built
	}
	if err := s.pinSelf(ctx); err != nil {
		return err
	}
	r, err := c.run(ctx, &s)
	if r != nil {
		r.print(os.Stdout, c.name+": "+c.does)
	}
	if err != nil {
		return err
	}
	return r.failure()
}

// note tells what happens, when asked to.
func (s *settings) note(format string, args ...any) {
	if s.verbose {
		fmt.Fprintf(os.Stderr, format+"\n", args...)
	}
}
