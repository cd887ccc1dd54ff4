package api

import (
	"encoding/json"
	"errors"
	"fmt"
	"maps"
	"math"
	"net/http"
	"net/http/httptest"
	"os"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/prometheus/client_golang/prometheus"
)

// The README promises its readers the answers that it prints, numbers to the last few digits.
func TestReadmeAnswers(t *testing.T) {
	text, err := os.ReadFile("../README.md")
	if err != nil {
		t.Fatal(err)
	}
	blocks := regexp.MustCompile("(?s)```sh\n(curl .*?)```\n\n```(json|csv)\n(.*?)```").FindAllSubmatch(text, -1)
	files := map[string]string{}
	for _, f := range regexp.MustCompile(`(?s)cat >(\S+) <<'END'\n(.*?)END\n`).FindAllSubmatch(text, -1) {
		files[string(f[1])] = string(f[2])
	}
	if len(blocks) < 6 {
		t.Fatalf("README.md has %d requests with answers, fewer than expected", len(blocks))
	}
	h := testHandler(t)
	for _, b := range blocks {
		command, kind, printed := string(b[1]), string(b[2]), string(b[3])
		t.Run(strings.SplitN(command, "\n", 2)[0], func(t *testing.T) {
			r, filter, err := parseCurl(command, files)
			if err != nil {
				t.Fatalf("%v in\n%s", err, command)
			}
			w := ask(t, h, r)
			if kind == "csv" {
				compareTables(t, printed, w.Body.String())
				return
			}
			got, err := decodeAll(w.Body.String())
			if err != nil {
				t.Fatalf("%v in the answer\n%s", err, w.Body)
			}
			if got, err = applyFilter(got, filter); err != nil {
				t.Fatal(err)
			}
			want, err := decodeAll(printed)
			if err != nil {
				t.Fatalf("%v in\n%s", err, printed)
			}
			compareJSON(t, "", any(want), any(got))
		})
	}
}

// The README's table of metrics has all of our own, and no other.
func TestReadmeMetrics(t *testing.T) {
	text, err := os.ReadFile("../README.md")
	if err != nil {
		t.Fatal(err)
	}
	_, table, found := strings.Cut(string(text), "\nMetrics for Prometheus")
	table, _, _ = strings.Cut(table, "\n## ")
	if !found {
		t.Fatal("README.md has no table of metrics")
	}
	listed := map[string]bool{}
	for row := range strings.SplitSeq(table, "\n") {
		if cells := strings.Split(row, "|"); len(cells) > 2 {
			for _, name := range regexp.MustCompile("`([a-z_]+)`").FindAllStringSubmatch(cells[1], -1) {
				listed["dewmark_"+name[1]] = true
			}
		}
	}
	registered := map[string]bool{}
	descriptions := make(chan *prometheus.Desc)
	go func() {
		testAPI(t).registry.Describe(descriptions)
		close(descriptions)
	}()
	for d := range descriptions {
		if m := regexp.MustCompile(`fqName: "(dewmark_[a-z_]+)"`).FindStringSubmatch(d.String()); m != nil {
			registered[m[1]] = true
		}
	}
	if !maps.Equal(listed, registered) {
		t.Errorf("README.md lists %v, the service has %v", slices.Sorted(maps.Keys(listed)), slices.Sorted(maps.Keys(registered)))
	}
}

// parseCurl turns one curl command of the README into its request and the jq filter behind it. Files are those that the
// README has its reader write.
func parseCurl(command string, files map[string]string) (r *http.Request, filter string, err error) {
	words, err := shellWords(command)
	if err != nil {
		return nil, "", err
	}
	var method, url, body string
	header := http.Header{}
	for i := 1; i < len(words); i++ {
		next := func() string {
			if i++; i < len(words) {
				return words[i]
			}
			return ""
		}
		switch word := words[i]; word {
		case "-s":
		case "--json":
			body = next()
			header.Set("Content-Type", "application/json")
			header.Set("Accept", "application/json")
			if name, ok := strings.CutPrefix(body, "@"); ok {
				body = files[name]
			}
		case "--data-binary":
			body = next()
		case "-H":
			name, value, _ := strings.Cut(next(), ":")
			header.Set(name, strings.TrimSpace(value))
		case "|":
			if next() != "jq" {
				return nil, "", fmt.Errorf("only jq may follow a pipe, not %s", words[i])
			}
			for filter = next(); strings.HasPrefix(filter, "-"); {
				filter = next()
			}
		default:
			if strings.HasPrefix(word, "-") || url != "" {
				return nil, "", fmt.Errorf("unexpected word %q", word)
			}
			url = word
		}
	}
	path, ok := strings.CutPrefix(url, "localhost:8080")
	if !ok {
		return nil, "", fmt.Errorf("the address is %q", url)
	}
	if method = http.MethodGet; body != "" {
		method = http.MethodPost
	}
	r = httptest.NewRequest(method, path, strings.NewReader(body))
	r.Header = header
	return r, filter, nil
}

// shellWords splits a command as a shell does: single quotes, double quotes and $'...' with \n; a backslash joins lines.
func shellWords(command string) ([]string, error) {
	var words []string
	var word strings.Builder
	inside := false
	rest := strings.ReplaceAll(command, "\\\n", " ")
	for rest != "" {
		c := rest[0]
		switch {
		case strings.HasPrefix(rest, "$'"), c == '\'', c == '"':
			open := strings.IndexAny(rest, `'"`)
			end := strings.IndexByte(rest[open+1:], rest[open])
			if end < 0 {
				return nil, errors.New("a quote has no end")
			}
			text := rest[open+1 : open+1+end]
			if open == 1 {
				text = strings.ReplaceAll(text, `\n`, "\n")
			}
			word.WriteString(text)
			rest, inside = rest[open+end+2:], true
			continue
		case c == ' ' || c == '\n':
			if inside {
				words = append(words, word.String())
				word.Reset()
			}
			inside = false
		default:
			word.WriteByte(c)
			inside = true
		}
		rest = rest[1:]
	}
	if inside {
		words = append(words, word.String())
	}
	return words, nil
}

// decodeAll decodes the JSON values in text.
func decodeAll(text string) ([]any, error) {
	var values []any
	for d := json.NewDecoder(strings.NewReader(text)); d.More(); {
		var v any
		if err := d.Decode(&v); err != nil {
			return nil, err
		}
		values = append(values, v)
	}
	return values, nil
}

var (
	filterPath  = regexp.MustCompile(`^(\.[a-z_0-9]*|\[\d*\])+$`)
	filterStep  = regexp.MustCompile(`\.[a-z_0-9]*|\[\d*\]`)
	filterEntry = regexp.MustCompile(`^"?([a-z_0-9]+)"?(?::\s*(\S+))?$`)
)

// applyFilter does what jq does with the few filters that the README uses: paths, pipes and objects of members.
func applyFilter(values []any, filter string) ([]any, error) {
	for stage := range strings.SplitSeq(filter, "|") {
		var out []any
		for _, v := range values {
			results, err := applyStage(v, strings.TrimSpace(stage))
			if err != nil {
				return nil, err
			}
			out = append(out, results...)
		}
		values = out
	}
	return values, nil
}

func applyStage(v any, stage string) ([]any, error) {
	if members, ok := strings.CutPrefix(stage, "{"); ok {
		object := map[string]any{}
		for entry := range strings.SplitSeq(strings.TrimSuffix(members, "}"), ",") {
			m := filterEntry.FindStringSubmatch(strings.TrimSpace(entry))
			if m == nil {
				return nil, fmt.Errorf("filter %q is beyond this test", stage)
			}
			path := m[2]
			if path == "" {
				path = "." + m[1]
			}
			results, err := applyStage(v, path)
			if err != nil || len(results) != 1 {
				return nil, fmt.Errorf("filter %q: %d results, %w", path, len(results), err)
			}
			object[m[1]] = results[0]
		}
		return []any{object}, nil
	}
	if stage == "" {
		return []any{v}, nil
	}
	if !filterPath.MatchString(stage) {
		return nil, fmt.Errorf("filter %q is beyond this test", stage)
	}
	values := []any{v}
	for _, step := range filterStep.FindAllString(stage, -1) {
		var out []any
		for _, v := range values {
			object, _ := v.(map[string]any)
			list, _ := v.([]any)
			index, err := strconv.Atoi(strings.Trim(step, "[]"))
			switch {
			case step == ".":
				out = append(out, v)
			case step[0] == '.' && object != nil:
				out = append(out, object[step[1:]])
			case step == "[]" && list != nil:
				out = append(out, list...)
			case step[0] == '[' && err == nil && index < len(list):
				out = append(out, list[index])
			default:
				return nil, fmt.Errorf("filter %q does not fit the answer", stage)
			}
		}
		values = out
	}
	return values, nil
}

// readmeTolerance bounds the relative difference between a printed number and the computed one: another machine may
// round an exponential otherwise, and solvers carry that on.
const readmeTolerance = 1e-9

func compareJSON(t *testing.T, path string, want, got any) {
	t.Helper()
	switch want := want.(type) {
	case map[string]any:
		object, _ := got.(map[string]any)
		if len(object) != len(want) {
			t.Errorf("%s: printed %d members, answered %d", path, len(want), len(object))
		}
		for name, member := range want {
			compareJSON(t, path+"/"+name, member, object[name])
		}
	case []any:
		list, _ := got.([]any)
		if len(list) != len(want) {
			t.Errorf("%s: printed %d elements, answered %d", path, len(want), len(list))
			return
		}
		for i := range want {
			compareJSON(t, path+"/"+strconv.Itoa(i), want[i], list[i])
		}
	case float64:
		number, ok := got.(float64)
		if !ok || !close9(want, number) {
			t.Errorf("%s: printed %v, answered %v", path, want, got)
		}
	default:
		if want != got {
			t.Errorf("%s: printed %v, answered %v", path, want, got)
		}
	}
}

// close9 reports whether two numbers are the same to nine digits. Residuals near zero only have to stay there.
func close9(want, got float64) bool {
	return math.Abs(got-want) <= readmeTolerance*math.Abs(want) || math.Abs(want) < 1e-9 && math.Abs(got) < 1e-9
}

func compareTables(t *testing.T, want, got string) {
	t.Helper()
	wantLines, gotLines := tableLines(want), tableLines(got)
	if len(wantLines) != len(gotLines) {
		t.Fatalf("printed %d lines, answered %d:\n%s", len(wantLines), len(gotLines), got)
	}
	for i := range wantLines {
		a, b := strings.Split(wantLines[i], ","), strings.Split(gotLines[i], ",")
		if len(a) != len(b) {
			t.Errorf("line %d: printed %q, answered %q", i+1, wantLines[i], gotLines[i])
			continue
		}
		for j := range a {
			x, errX := strconv.ParseFloat(a[j], 64)
			y, errY := strconv.ParseFloat(b[j], 64)
			if a[j] != b[j] && (errX != nil || errY != nil || !close9(x, y)) {
				t.Errorf("line %d, cell %d: printed %q, answered %q", i+1, j+1, a[j], b[j])
			}
		}
	}
}

func tableLines(text string) []string {
	return strings.Split(strings.TrimSpace(strings.ReplaceAll(text, "\r\n", "\n")), "\n")
}
