package main

import (
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"strings"
)

// errUsage reports a command line that the flag package has complained about already.
var errUsage = errors.New("usage")

// newFlags returns an empty set of flags for a command whose arguments after the flags are called operands.
func newFlags(command, operands string, stderr io.Writer) *flag.FlagSet {
	flags := flag.NewFlagSet(command, flag.ContinueOnError)
	flags.SetOutput(stderr)
	flags.Usage = func() {
		fmt.Fprintln(stderr, "Usage:", strings.TrimSpace("dewmark "+command+" [flags] "+operands))
		flags.VisitAll(func(f *flag.Flag) {
			value, help := flag.UnquoteUsage(f)
			fmt.Fprintf(stderr, "  --%-28s %s (%s, default %q)\n", strings.TrimSpace(f.Name+" "+value), help, variable(f.Name), f.DefValue)
		})
	}
	return flags
}

// variable names the environment variable of a flag.
func variable(flagName string) string {
	return "DEWMARK_" + strings.ToUpper(strings.ReplaceAll(flagName, "-", "_"))
}

// parse sets flags from the environment and then from args, and wants as many operands.
func parse(flags *flag.FlagSet, args []string, operands int) error {
	var err error
	flags.VisitAll(func(f *flag.Flag) {
		value, ok := os.LookupEnv(variable(f.Name))
		if !ok || err != nil {
			return
		}
		if cause := flags.Set(f.Name, value); cause != nil {
			err = fmt.Errorf("%s=%q: %w", variable(f.Name), value, cause)
		}
	})
	if err != nil {
		return err
	}
	if err := flags.Parse(args); err != nil {
		if errors.Is(err, flag.ErrHelp) {
			return err
		}
		return errUsage
	}
	if flags.NArg() != operands {
		fmt.Fprintf(flags.Output(), "%s takes %d operands, not %d\n", flags.Name(), operands, flags.NArg())
		flags.Usage()
		return errUsage
	}
	return nil
}
