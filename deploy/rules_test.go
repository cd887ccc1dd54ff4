package deploy_test

import (
	"bytes"
	"testing"

	"github.com/goccy/go-yaml"
)

// ruleFile is a file of rules for Prometheus.
type ruleFile struct {
	Groups []struct {
		Name  string `yaml:"name"`
		Rules []struct {
			Record      string            `yaml:"record"`
			Alert       string            `yaml:"alert"`
			Expr        string            `yaml:"expr"`
			For         string            `yaml:"for"`
			Labels      map[string]string `yaml:"labels"`
			Annotations map[string]string `yaml:"annotations"`
		} `yaml:"rules"`
	} `yaml:"groups"`
}

// rules reads the rules, and adds to the series what they record.
func rules(t *testing.T, s series) []ruleFile {
	t.Helper()
	var all []ruleFile
	for _, name := range []string{"prometheus/recording.yaml", "prometheus/alerts.yaml"} {
		var file ruleFile
		if err := yaml.UnmarshalWithOptions(read(t, name), &file, yaml.Strict()); err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		for _, g := range file.Groups {
			for _, r := range g.Rules {
				if r.Record == "" {
					continue
				}
				if err := s.check(r.Expr); err != nil {
					t.Errorf("%s: %v", r.Record, err)
				}
				asked, labels := dissect(r.Expr)
				s[r.Record] = map[string][]string{}
				for _, label := range labels {
					if label != "le" {
						s[r.Record][label] = s[asked[0].name][label]
					}
				}
			}
		}
		all = append(all, file)
	}
	return all
}

// Every name and label in the rules is one that the service exposes, or a rule before records.
func TestRules(t *testing.T) {
	s := exposed(t)
	readme, tests := read(t, "README.md"), read(t, "prometheus/tests/alerts.yaml")
	alerts := 0
	for _, file := range rules(t, s) {
		for _, g := range file.Groups {
			for _, r := range g.Rules {
				if r.Alert == "" {
					continue
				}
				alerts++
				if err := s.check(r.Expr); err != nil {
					t.Errorf("%s: %v", r.Alert, err)
				}
				if severity := r.Labels["severity"]; severity != "critical" && severity != "warning" || r.Annotations["summary"] == "" || r.Annotations["description"] == "" {
					t.Errorf("%s has severity %q and annotations %q", r.Alert, severity, r.Annotations)
				}
				if !bytes.Contains(readme, []byte("\n**"+r.Alert+"**")) {
					t.Errorf("README.md does not say what to do about %s", r.Alert)
				}
				if !bytes.Contains(tests, []byte("- alertname: "+r.Alert+"\n")) {
					t.Errorf("no test rings %s", r.Alert)
				}
			}
		}
	}
	if alerts == 0 {
		t.Error("there are no alerts")
	}
}
