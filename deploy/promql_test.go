package deploy_test

import (
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// number writes a number as Prometheus does in the label of a bucket.
func number(x float64) string { return strconv.FormatFloat(x, 'g', -1, 64) }

var (
	grouping = regexp.MustCompile(`\b(by|without|on|ignoring|group_left|group_right)\s*\(([^)]*)\)`)
	window   = regexp.MustCompile(`\[[^\]]*\]`)
	offset   = regexp.MustCompile(`\boffset\s+\w+`)
	word     = regexp.MustCompile(`\b([a-zA-Z_:][a-zA-Z0-9_:]*)\s*(\{[^}]*\}|\()?`) // not the e of 1e6
	matcher  = regexp.MustCompile(`([a-z_]+)\s*(=~|!~|!=|=)\s*"([^"]*)"`)
	operator = []string{"and", "or", "unless", "bool"}
)

// selected is one place where an expression names series.
type selected struct {
	name     string
	matchers [][]string // each with label, operator, value
}

// dissect lists what an expression of PromQL asks for and the labels it groups by. promtool has checked the syntax, so that
// words are enough here: one is a function if a parenthesis follows, else an operator or the name of series.
func dissect(expr string) (asked []selected, labels []string) {
	for _, g := range grouping.FindAllStringSubmatch(expr, -1) {
		for label := range strings.SplitSeq(g[2], ",") {
			if label = strings.TrimSpace(label); label != "" {
				labels = append(labels, label)
			}
		}
	}
	for _, r := range []*regexp.Regexp{grouping, window, offset} {
		expr = r.ReplaceAllString(expr, " ")
	}
	for _, w := range word.FindAllStringSubmatch(expr, -1) {
		if w[2] == "(" || slices.Contains(operator, w[1]) {
			continue
		}
		s := selected{name: w[1]}
		for _, m := range matcher.FindAllStringSubmatch(w[2], -1) {
			s.matchers = append(s.matchers, m[1:])
		}
		asked = append(asked, s)
	}
	return asked, labels
}

// check reports whatever an expression asks for that the service does not expose and no rule records.
func (s series) check(expr string) error {
	asked, grouped := dissect(expr)
	if len(asked) == 0 && !strings.Contains(expr, "vector(") {
		return fmt.Errorf("%s asks for nothing", expr)
	}
	for _, a := range asked {
		labels, ok := s[a.name]
		if !ok {
			return fmt.Errorf("%s is not exposed: %s", a.name, expr)
		}
		for _, m := range a.matchers {
			values, ok := labels[m[0]]
			if !ok {
				return fmt.Errorf("%s has no label %s: %s", a.name, m[0], expr)
			}
			if _, err := strconv.Atoi(m[2]); m[1] == "=" && err == nil && (m[0] == "le" || m[0] == "quantile") {
				return fmt.Errorf("%s=%q is %q in OpenMetrics: %s", m[0], m[2], m[2]+".0", expr)
			}
			if m[1] == "=" && slices.Contains([]string{"route", "kind", "outcome", "reason", "result", "le", "quantile"}, m[0]) && values != nil && !slices.Contains(values, m[2]) {
				return fmt.Errorf("no series of %s has %s=%q, only %q: %s", a.name, m[0], m[2], values, expr)
			}
		}
	}
	for _, label := range grouped {
		if !slices.ContainsFunc(asked, func(a selected) bool { _, ok := s[a.name][label]; return ok }) {
			return fmt.Errorf("nothing here has a label %s: %s", label, expr)
		}
	}
	return nil
}

// The check finds what it is there for.
func TestCheck(t *testing.T) {
	s := series{
		"up": {"job": nil}, "x_bucket": {"le": {"1", "0.25"}, "route": {"/v1/cycles"}, "job": nil}, "a:b:c": {"job": nil},
	}
	for _, tt := range []struct{ expr, says string }{
		{`sum by (job, route) (rate(x_bucket{job="d", le="0.25", route=~"/v2/.+"}[5m])) / 1e6`, ""},
		{`absent(up{job="d"} == 1) or a:b:c > 14.4 * 0.001 and on (job) up offset 1m`, ""},
		{`x_bucket < 2 ^ 62`, ""},
		{`rate(x_total[5m])`, "x_total is not exposed"},
		{`sum(rate(x_bucket[5m])) / sum(y)`, "y is not exposed"},
		{`up{instance="a"}`, "no label instance"},
		{`sum by (le) (up)`, "a label le"},
		{`x_bucket{le="0.5"}`, `no series of x_bucket has le="0.5"`},
		{`x_bucket{route="/v1/cycle"}`, "no series"},
		{`x_bucket{le="1"}`, "OpenMetrics"},
		{`1 + 2`, "asks for nothing"},
	} {
		if err := s.check(tt.expr); (err == nil) != (tt.says == "") || err != nil && !strings.Contains(err.Error(), tt.says) {
			t.Errorf("%s: %v, want %q", tt.expr, err, tt.says)
		}
	}
}
