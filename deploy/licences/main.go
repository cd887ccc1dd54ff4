// Command licences writes the licences of everything of others that a Go binary holds: most of them ask to go along with it.
//
//	go run ./deploy/licences dewmark >licences.txt
//
// Modules and their versions are those that the binary itself names; their texts come from the module cache, that of Go from
// its own folder. It needs no network once the modules are there.
package main

import (
	"bytes"
	"debug/buildinfo"
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"runtime/debug"
	"strings"
)

func main() {
	if len(os.Args) != 2 {
		fmt.Fprintln(os.Stderr, "usage: licences BINARY")
		os.Exit(2)
	}
	if err := run(os.Args[1], os.Stdout); err != nil {
		fmt.Fprintln(os.Stderr, "licences:", err)
		os.Exit(1)
	}
}

// part is something of others in the binary.
type part struct{ name, version, folder string }

func run(binary string, out io.Writer) error {
	info, err := buildinfo.ReadFile(binary)
	if err != nil {
		return err
	}
	parts, err := locate(info)
	if err != nil {
		return err
	}
	text, err := licences(parts)
	if err != nil {
		return err
	}
	_, err = out.Write(text)
	return err
}

// locate finds the folders of the modules that info names, and that of Go.
func locate(info *debug.BuildInfo) ([]part, error) {
	release, err := goSays("env", "GOVERSION", "GOROOT")
	if err != nil {
		return nil, err
	}
	if len(release) != 2 || release[0] != info.GoVersion {
		return nil, fmt.Errorf("the binary was built by %s, not by %s", info.GoVersion, release[0])
	}
	parts := []part{{"Go", release[0], release[1]}}
	args := []string{"list", "-m", "-f", "{{.Version}} {{.Dir}}"}
	for _, module := range info.Deps {
		if module.Replace != nil {
			return nil, fmt.Errorf("%s is replaced; say here where its licence is", module.Path)
		}
		args = append(args, module.Path)
	}
	folders, err := goSays(args...)
	if err != nil || len(folders) != len(info.Deps) {
		return nil, errors.Join(err, fmt.Errorf("%d folders of %d modules", len(folders), len(info.Deps)))
	}
	for i, module := range info.Deps {
		version, folder, _ := strings.Cut(folders[i], " ")
		if version != module.Version {
			return nil, fmt.Errorf("the binary has %s %s, go.mod %s", module.Path, module.Version, version)
		}
		parts = append(parts, part{module.Path, version, folder})
	}
	return parts, nil
}

// goSays returns the lines that a go command prints.
func goSays(args ...string) ([]string, error) {
	command := exec.Command("go", args...) //nolint:gosec,noctx // a tool of the build, with the modules of a binary
	command.Stderr = os.Stderr
	text, err := command.Output()
	if err != nil {
		return nil, fmt.Errorf("go %s: %w", args[0], err)
	}
	return strings.Split(strings.TrimSuffix(string(text), "\n"), "\n"), nil
}

// aText matches the names of files that hold a licence, or what it wants to be passed on.
var aText = regexp.MustCompile(`(?i)^(licen[cs]e|notice|copying|patents)`)

// licences returns the texts of all parts, one after the other. Each must have one.
func licences(parts []part) ([]byte, error) {
	var all bytes.Buffer
	all.WriteString("dewmark contains the following of others, under their own licences.\n")
	for _, p := range parts {
		fmt.Fprintf(&all, "\n==== %s %s\n", p.name, p.version)
		entries, err := os.ReadDir(p.folder)
		if err != nil {
			return nil, err
		}
		found := false
		for _, e := range entries {
			if !e.Type().IsRegular() || !aText.MatchString(e.Name()) {
				continue
			}
			text, err := os.ReadFile(filepath.Join(p.folder, e.Name()))
			if err != nil {
				return nil, err
			}
			fmt.Fprintf(&all, "\n%s\n", bytes.TrimRight(text, "\n"))
			found = true
		}
		if !found {
			return nil, fmt.Errorf("no text of the licence of %s in %s", p.name, p.folder)
		}
	}
	return all.Bytes(), nil
}
