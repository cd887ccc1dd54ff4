// Package reasons puts together what the errors of the service packages have in common: a list of refusals, each of which
// blames a field.
package reasons

import "strings"

// Reason is a refusal.
type Reason interface {
	// Blame returns the path of the field at fault or "", what was wrong and what is allowed, and the error behind it or nil.
	Blame() (field, text string, cause error)
}

// Text returns the text of an error of that package with its reasons.
func Text[R Reason](from string, all []R) string {
	texts := make([]string, len(all))
	for i, r := range all {
		field, text, cause := r.Blame()
		if field != "" {
			text = field + ": " + text
		}
		if cause != nil {
			text += ": " + cause.Error()
		}
		texts[i] = text
	}
	return from + ": " + strings.Join(texts, "; ")
}

// Causes returns the errors behind the reasons, for errors.Is and errors.As.
func Causes[R Reason](all []R) []error {
	var causes []error
	for _, r := range all {
		if _, _, cause := r.Blame(); cause != nil {
			causes = append(causes, cause)
		}
	}
	return causes
}
