// Command dewmark computes refrigerant states and vapour-compression cycles: as a service over HTTP, or for one request
// given on the command line.
package main

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strings"
	"syscall"
)

// The exit codes of call. The others exit with exitOther for any failure.
const (
	exitGood    = 0
	exitRefused = 1 // the answer is a 4xx
	exitOther   = 2 // any other answer, or the command line was not understood
)

const usage = `dewmark computes refrigerant states and vapour-compression cycles.

Usage:

  dewmark [serve] [flags]           answer over HTTP until interrupted
  dewmark call [flags] METHOD PATH  answer one request, its body read from standard input: dewmark call POST /v1/cycles < request.json
  dewmark probe [flags]             ask a running service whether it is ready, for container health checks
  dewmark token NAME                make a token for a client and print its line for the file of tokens: dewmark token quoting >>tokens
  dewmark version                   print the version

"dewmark COMMAND --help" lists the flags of a command. Each is also an environment variable: --admin-listen is
DEWMARK_ADMIN_LISTEN. What is given as a flag goes first.
`

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	code := run(ctx, os.Args[1:], os.Stdin, os.Stdout, os.Stderr)
	stop()
	os.Exit(code)
}

// run executes a command line and returns its exit code.
func run(ctx context.Context, args []string, stdin io.Reader, stdout, stderr io.Writer) int {
	name := "serve"
	if len(args) > 0 && !strings.HasPrefix(args[0], "-") {
		name, args = args[0], args[1:]
	}
	var code int
	var err error
	switch name {
	case "serve":
		log := newJournal(stderr)
		defer log.close()
		stderr = log // for the failure below too, so that it cannot wait for a reader either
		code, err = exitOther, serveCommand(ctx, args, log)
	case "call":
		code, err = callCommand(ctx, args, stdin, stdout, stderr)
	case "probe":
		code, err = exitRefused, probeCommand(ctx, args, stderr)
	case "token":
		code, err = exitOther, tokenCommand(args, stdout, stderr)
	case "version":
		_, err = fmt.Fprintln(stdout, release())
	case "help":
		_, err = fmt.Fprint(stdout, usage)
	default:
		code, err = exitOther, fmt.Errorf("unknown command %q\n\n%s", name, usage)
	}
	switch {
	case errors.Is(err, flag.ErrHelp): // the flag package has printed it
		return exitGood
	case errors.Is(err, errUsage): // likewise
		return exitOther
	case err != nil:
		fmt.Fprintln(stderr, "dewmark:", err)
		return max(code, exitRefused)
	case name == "call":
		return code
	}
	return exitGood
}
