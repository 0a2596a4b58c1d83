package doc

import (
	"strings"

	"bandwright/physics/catalog"
)

// Problem says what is wrong in a file, where, and what to do.
type Problem = catalog.FileError

// Problems is everything that is wrong in a file, in the order of its lines.
type Problems struct{ List []*Problem }

// Error returns one line for each problem: "file:line:column: problem; remedy".
func (p *Problems) Error() string {
	lines := make([]string, len(p.List))
	for i, one := range p.List {
		lines[i] = one.Error()
	}
	return strings.Join(lines, "\n")
}
