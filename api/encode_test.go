package api

import (
	"encoding/json"
	"testing"
)

// Text is written as the standard library writes it, whatever is in it.
func TestAppendText(t *testing.T) {
	for _, text := range []string{
		"", "R134a", `"Thermodynamic Properties of Propane. III."`, `\`, `a\"b`, "a\tb\n", "\x00", "\x7f", "Müller, 0 °C – ½", "line\u2028ends\u2029here", "\xff broken \"", "<&>",
	} {
		checkText(t, text)
	}
}

func FuzzAppendText(f *testing.F) {
	f.Add("a\"\\ü\u2028")
	f.Fuzz(func(t *testing.T, text string) { checkText(t, text) })
}

func checkText(t *testing.T, text string) {
	t.Helper()
	const before = "behind "
	got := string(appendText([]byte(before), text))
	want, err := appendValue([]byte(before), text)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("%q is written as %s, want %s", text, got, want)
	}
	var back string
	if err := json.Unmarshal([]byte(got[len(before):]), &back); err != nil {
		t.Errorf("%q: %v", text, err)
	}
}
