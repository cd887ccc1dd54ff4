package main

import (
	"fmt"
	"os"
	"regexp"
	"strings"
	"testing"
)

// The README's table has every flag of serve with its variable and its default.
func TestReadmeFlags(t *testing.T) {
	text, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	_, _, help := command(t, "", "serve", "--help")
	flags := regexp.MustCompile(`--([a-z-]+).*\((DEWMARK_[A-Z_]+), default "(.*)"\)`).FindAllStringSubmatch(help, -1)
	if len(flags) < 5 {
		t.Fatalf("only %d flags in\n%s", len(flags), help)
	}
	for _, f := range flags {
		row := fmt.Sprintf("\n| `--%s` | `%s` | `%s` |", f[1], f[2], f[3])
		if row = strings.Replace(row, " `` |", " |", 1); !strings.Contains(string(text), row) {
			t.Errorf("README.md lacks%s", row)
		}
	}
}
