package main

import (
	"errors"
	"fmt"
	"io"
	"strings"
	"sync"
)

// report is a table of what was measured.
type report struct {
	columns []string
	rows    [][]string

	mu     sync.Mutex
	failed []string // what must not happen on any machine, however slow
}

func newReport(columns ...string) *report { return &report{columns: columns} }

func (r *report) row(cells ...string) { r.rows = append(r.rows, cells) }

// fail notes a wrong answer or another fault of the service. Missing a figure is none: that depends on the machine.
func (r *report) fail(format string, args ...any) {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.failed = append(r.failed, fmt.Sprintf(format, args...))
}

func (r *report) failure() error {
	if len(r.failed) == 0 {
		return nil
	}
	return errors.New(strings.Join(r.failed, "; "))
}

// print writes the table in Markdown.
func (r *report) print(w io.Writer, title string) {
	fmt.Fprintf(w, "%s\n\n| %s |\n|%s\n", title, strings.Join(r.columns, " | "), strings.Repeat("---|", len(r.columns)))
	for _, cells := range r.rows {
		fmt.Fprintf(w, "| %s |\n", strings.Join(cells, " | "))
	}
	fmt.Fprintln(w)
}

// goal compares a figure with its goal.
func goal(value, limit float64) string {
	if value <= limit {
		return "met"
	}
	return "missed"
}
