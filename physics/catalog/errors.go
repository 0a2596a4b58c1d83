package catalog

import (
	"fmt"
	"strings"
)

// FileError says what is wrong in a file, where, and what to do.
type FileError struct {
	File         string
	Line, Column int    // from 1; 0 when the whole file is meant
	Problem      string // what is wrong
	Remedy       string // what to do
}

// Error returns "file:line:column: problem; remedy".
func (e *FileError) Error() string {
	var b strings.Builder
	b.WriteString(e.File)
	if e.Line > 0 {
		fmt.Fprintf(&b, ":%d", e.Line)
		if e.Column > 0 {
			fmt.Fprintf(&b, ":%d", e.Column)
		}
	}
	b.WriteString(": ")
	b.WriteString(e.Problem)
	if e.Remedy != "" {
		b.WriteString("; ")
		b.WriteString(e.Remedy)
	}
	return b.String()
}
