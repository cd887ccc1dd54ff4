package main

import (
	"fmt"
	"io"

	"dewmark/api"
)

// tokenCommand makes a token for a client. The line for the file of tokens goes to standard output and the token itself to
// standard error, so that appending to the file shows it once and keeps it nowhere.
func tokenCommand(args []string, stdout, stderr io.Writer) error {
	flags := newFlags("token", "NAME", stderr)
	if err := parse(flags, args, 1); err != nil {
		return err
	}
	token, line, err := api.NewToken(flags.Arg(0))
	if err != nil {
		return err
	}
	if _, err := fmt.Fprintln(stdout, line); err != nil {
		return err
	}
	_, err = fmt.Fprintf(stderr, "The token of %s, shown this once: %s\n", flags.Arg(0), token)
	return err
}
