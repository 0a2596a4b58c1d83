package catalog

import (
	"fmt"
	"io/fs"
	"path"
	"sort"
	"strings"
	"sync"

	"bandwright/assets"
)

// shipped parses the embedded sets once. A set that cannot be read is a fault
// of the program, held by a test.
var shipped = sync.OnceValue(func() []*Set {
	var sets []*Set
	err := fs.WalkDir(assets.Sets, "sets", func(name string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || path.Ext(name) != ".toml" {
			return err
		}
		data, err := assets.Sets.ReadFile(name)
		if err != nil {
			return err
		}
		s, err := ParseFile(name, data)
		if err != nil {
			return err
		}
		sets = append(sets, s)
		return nil
	})
	if err != nil {
		panic(fmt.Sprintf("catalog: shipped parameter sets: %v", err))
	}
	sort.SliceStable(sets, func(i, j int) bool { return order(sets[i]) < order(sets[j]) })
	return sets
})

// order sorts sets by family, homopolar before heteropolar, then by weight.
func order(s *Set) string {
	family, _, _ := strings.Cut(s.ID, "/")
	return fmt.Sprintf("%s/%d/%06.3f/%s", family, len(s.Elements), s.A, s.ID)
}

// Shipped returns the shipped sets, grouped by family. The caller must not
// change them.
func Shipped() []*Set { return shipped() }

// Lookup returns the shipped set of an id.
func Lookup(id string) (*Set, error) {
	var near []string
	wanted := strings.ToLower(id)
	_, last, _ := strings.Cut(wanted, "/")
	for _, s := range shipped() {
		if s.ID == id {
			return s, nil
		}
		switch l := strings.ToLower(s.ID); {
		case l == wanted:
			return nil, fmt.Errorf("unknown parameter set %q: did you mean %s?", id, s.ID)
		case last != "" && strings.HasSuffix(l, "/"+last):
			near = append(near, s.ID)
		}
	}
	if len(near) > 0 {
		return nil, fmt.Errorf("unknown parameter set %q: did you mean %s?", id, strings.Join(near, " or "))
	}
	ids := make([]string, 0, len(shipped()))
	for _, s := range shipped() {
		ids = append(ids, s.ID)
	}
	return nil, fmt.Errorf("unknown parameter set %q: use one of %s, or a file of your own", id, strings.Join(ids, ", "))
}
