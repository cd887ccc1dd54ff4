package api

// Problem is an RFC 9457 problem document. It is also an error, so that handlers can return one.
type Problem struct {
	Type        string        `json:"type"` // a path such as /problems/out-of-range, or about:blank
	Title       string        `json:"title"`
	Status      int           `json:"status"`
	Detail      string        `json:"detail,omitempty"`
	Instance    string        `json:"instance,omitempty"` // the path of the request; absent inside a batch
	Errors      []MemberError `json:"errors,omitempty"`
	Solutions   []stateView   `json:"solutions,omitempty"`   // of an ambiguous pair: every state that has it
	Suggestions []string      `json:"suggestions,omitempty"` // designations near an unknown one
}

// MemberError says what is wrong with one member of the request.
type MemberError struct {
	Pointer string `json:"pointer"` // JSON pointer as a URI fragment, such as "#/points/3/pressure"
	Code    string `json:"code"`
	Detail  string `json:"detail"`
}
