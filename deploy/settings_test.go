package deploy_test

import (
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"testing"
)

// Every setting that a file here gives is one of the service, whose README lists them all and is held against its flags: a
// variable that the service does not know would be passed over in silence.
func TestSettings(t *testing.T) {
	known := map[string]bool{}
	for _, row := range regexp.MustCompile("(?m)^\\| `--[a-z-]+` \\| `(DEWMARK_[A-Z_]+)`").FindAllSubmatch(read(t, "../README.md"), -1) {
		known[string(row[1])] = true
	}
	if len(known) < 5 {
		t.Fatalf("README.md lists %d settings", len(known))
	}
	found := 0
	err := filepath.WalkDir(".", func(path string, entry fs.DirEntry, err error) error {
		if err != nil || entry.IsDir() || !slices.Contains([]string{".yaml", ".service", ".md"}, filepath.Ext(path)) {
			return err
		}
		text, err := os.ReadFile(path)
		for _, name := range regexp.MustCompile(`DEWMARK_[A-Z_]+[A-Z]`).FindAllString(string(text), -1) {
			found++
			if !known[name] {
				t.Errorf("%s: %s is no setting of the service", path, name)
			}
		}
		return err
	})
	if err != nil || found == 0 {
		t.Errorf("%d settings found, %v", found, err)
	}
}
