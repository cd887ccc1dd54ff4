package main

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

func TestLicences(t *testing.T) {
	folder := func(files map[string]string) string {
		dir := t.TempDir()
		for name, text := range files {
			if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o600); err != nil {
				t.Fatal(err)
			}
		}
		return dir
	}
	one := part{"example.org/one", "v1.0.0", folder(map[string]string{"LICENSE": "first\n", "NOTICE.txt": "second", "main.go": "package one\n"})}
	two := part{"example.org/two", "v2.0.0", folder(map[string]string{"licence.md": "third\n\n"})}
	got, err := licences([]part{one, two})
	want := "\n==== example.org/one v1.0.0\n\nfirst\n\nsecond\n\n==== example.org/two v2.0.0\n\nthird\n"
	if err != nil || !strings.HasSuffix(string(got), want) {
		t.Errorf("%q, %v", got, err)
	}
	bare := part{"example.org/bare", "v3.0.0", folder(map[string]string{"README.md": "free\n"})}
	if _, err := licences([]part{one, bare}); err == nil || !strings.Contains(err.Error(), "example.org/bare") {
		t.Errorf("a module without a licence: %v", err)
	}
}
