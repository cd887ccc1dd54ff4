package cycle

// nameOf returns the name of a value that counts its kind's names, or "" for one that is none of them.
func nameOf[T ~uint8](names []string, v T) string {
	if int(v) >= len(names) {
		return ""
	}
	return names[v]
}

// parse returns the value with that name and reports whether there is one.
func parse[T ~uint8](names []string, name string) (T, bool) {
	for i, n := range names {
		if n == name && n != "" {
			return T(i), true
		}
	}
	return 0, false
}
