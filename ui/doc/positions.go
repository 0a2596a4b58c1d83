package doc

import (
	"strconv"
	"strings"
)

// place is a line and a column, from 1.
type place struct{ line, column int }

// positions finds where each key of a TOML text stands: "crystal.a",
// "crystal.site[1].at", and the tables themselves. The text must be valid TOML.
// Keys within inline tables have no place of their own.
func positions(text string) map[string]place {
	found := map[string]place{}
	count := map[string]int{} // elements of arrays of tables so far
	table := ""
	quote := "" // the mark that ends the text of several lines that we are in
	for n, line := range strings.Split(text, "\n") {
		if quote != "" {
			if strings.Contains(line, quote) {
				quote = ""
			}
			continue
		}
		body := strings.TrimLeft(line, " \t")
		at := place{n + 1, 1 + len([]rune(line[:len(line)-len(body)]))}
		switch {
		case strings.HasPrefix(body, "[["):
			keys, rest := splitKey(body[2:])
			if !strings.HasPrefix(rest, "]]") {
				continue
			}
			name := within(keys, count)
			table = name + "[" + strconv.Itoa(count[name]) + "]"
			count[name]++
			found[table] = at
			if _, ok := found[name]; !ok {
				found[name] = at
			}
		case strings.HasPrefix(body, "["):
			keys, rest := splitKey(body[1:])
			if !strings.HasPrefix(rest, "]") {
				continue
			}
			table = within(keys, count)
			found[table] = at
		default:
			keys, rest := splitKey(body)
			if len(keys) == 0 || !strings.HasPrefix(rest, "=") {
				continue
			}
			name := table
			for _, k := range keys {
				name = join(name, k)
				if _, ok := found[name]; !ok {
					found[name] = at
				}
			}
			value := strings.TrimSpace(rest[1:])
			for _, q := range []string{`"""`, "'''"} {
				if strings.HasPrefix(value, q) && !strings.Contains(value[3:], q) {
					quote = q
				}
			}
		}
	}
	return found
}

// within is the path of a table whose parents may be arrays of tables: the
// last element of each is meant.
func within(keys []string, count map[string]int) string {
	name := ""
	for i, k := range keys {
		name = join(name, k)
		if n := count[name]; n > 0 && i < len(keys)-1 {
			name += "[" + strconv.Itoa(n-1) + "]"
		}
	}
	return name
}

func join(table, key string) string {
	if table == "" {
		return key
	}
	return table + "." + key
}

// splitKey reads a dotted key from the start of a text and returns what
// follows it.
func splitKey(s string) (keys []string, rest string) {
	for {
		s = strings.TrimLeft(s, " \t")
		if s == "" {
			return keys, s
		}
		switch s[0] {
		case '"', '\'':
			end := strings.IndexByte(s[1:], s[0])
			if end < 0 {
				return nil, s
			}
			key := s[1 : end+1]
			if s[0] == '"' {
				if plain, err := strconv.Unquote(s[:end+2]); err == nil {
					key = plain
				}
			}
			keys, s = append(keys, key), s[end+2:]
		default:
			end := strings.IndexFunc(s, func(r rune) bool {
				return !(r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z' || r >= '0' && r <= '9' || r == '_' || r == '-')
			})
			if end < 0 {
				end = len(s)
			}
			if end == 0 {
				return nil, s
			}
			keys, s = append(keys, s[:end]), s[end:]
		}
		s = strings.TrimLeft(s, " \t")
		if !strings.HasPrefix(s, ".") {
			return keys, s
		}
		s = s[1:]
	}
}
