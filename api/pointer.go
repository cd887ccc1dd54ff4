package api

import (
	"fmt"
	"strconv"
	"strings"
)

// pointerTo returns the pointer that leads along names.
func pointerTo(names []string) string {
	var b strings.Builder
	b.WriteByte('#')
	for _, name := range names {
		b.WriteByte('/')
		b.WriteString(escapePointer(name))
	}
	return b.String()
}

// escapePointer writes one name for a pointer in a URI fragment.
func escapePointer(name string) string {
	const plain = "-._~!$&'()*+,;=:@?" // of RFC 3986 fragments, besides letters and digits
	var b strings.Builder
	for _, c := range []byte(strings.NewReplacer("~", "~0", "/", "~1").Replace(shorten(name))) {
		if 'a' <= c && c <= 'z' || 'A' <= c && c <= 'Z' || '0' <= c && c <= '9' || strings.IndexByte(plain, c) >= 0 {
			b.WriteByte(c)
		} else {
			fmt.Fprintf(&b, "%%%02X", c)
		}
	}
	return b.String()
}

// place is an item of a list in the request, or the list's pointer itself when index is negative.
type place struct {
	list  string
	index int
}

func (p place) String() string {
	if p.index < 0 {
		return p.list
	}
	return p.list + "/" + strconv.Itoa(p.index)
}
