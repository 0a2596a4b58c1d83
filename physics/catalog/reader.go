package catalog

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"
	"unicode/utf8"

	"github.com/BurntSushi/toml"
)

// reader walks a TOML file key by key. It keeps the first error in the order
// of the walk, with the position of the key it concerns. Arrays of tables have no positions of their own, so
// the form of the files does without them.
type reader struct {
	file  string
	meta  toml.MetaData
	root  map[string]toml.Primitive
	lines []string
	err   *FileError
}

// table is one table of the file, or none (m == nil) when it is absent.
type table struct {
	r    *reader
	path []string
	m    map[string]any
}

func open(file string, data []byte) (*reader, table, *FileError) {
	r := &reader{file: file, lines: strings.Split(string(data), "\n")}
	if i := strings.IndexByte(string(data), 0); i >= 0 {
		return nil, table{}, &FileError{File: file, Line: 1 + strings.Count(string(data[:i]), "\n"), Column: i - strings.LastIndexByte(string(data[:i]), '\n'),
			Problem: "the file holds a zero byte and is no text", Remedy: "give a TOML text file in UTF-8"}
	}
	var err error
	r.meta, err = toml.Decode(string(data), &r.root)
	if err != nil {
		return nil, table{}, r.syntaxError(err)
	}
	m := make(map[string]any)
	if _, err = toml.Decode(string(data), &m); err != nil {
		return nil, table{}, r.syntaxError(err)
	}
	return r, table{r: r, m: m}, nil
}

func (r *reader) syntaxError(err error) *FileError {
	fe := &FileError{File: r.file, Line: 1, Column: 1, Problem: strings.TrimPrefix(err.Error(), "toml: "),
		Remedy: "write the file as TOML: key = value, texts in quotes, each key once"}
	var pe toml.ParseError
	if errors.As(err, &pe) {
		// At the end of a file the decoder may stand behind it.
		fe.Line = min(max(pe.Position.Line, 1), len(r.lines))
		line := r.lines[fe.Line-1]
		fe.Column = 1 + utf8.RuneCountInString(line[:min(max(pe.Position.Col-1, 0), len(line))])
		fe.Problem = pe.Message
		if strings.Contains(pe.Message, "already been defined") {
			fe.Column = 1 // the decoder stands behind the second one
		}
	}
	return fe
}

// finder is a decoding target that refuses every value; the decoder then
// tells where the value stands.
type finder struct{}

var errFound = errors.New("found")

// UnmarshalTOML implements toml.Unmarshaler.
func (finder) UnmarshalTOML(any) error { return errFound }

// position returns line and column of the value at path; of the nearest
// enclosing table that has a place when the value itself is not in the file;
// and the start of the file when there is none.
func (r *reader) position(path []string) (line, column int) {
	line, column = 1, 1
	tables := r.root
	for _, key := range path {
		p, ok := tables[key]
		if !ok {
			break
		}
		if l, c := r.place(p); l > 0 {
			line, column = l, c
		}
		tables = nil
		if r.meta.PrimitiveDecode(p, &tables) != nil {
			break
		}
	}
	return line, column
}

// place returns where a value stands, or the first place within a table that
// has no header of its own, as bond in [bond.shell1.Si-Si]; 0 when there is none.
func (r *reader) place(p toml.Primitive) (line, column int) {
	var pe toml.ParseError
	if errors.As(r.meta.PrimitiveDecode(p, &finder{}), &pe) && pe.Position.Line > 0 {
		return pe.Position.Line, r.column(pe.Position)
	}
	var inner map[string]toml.Primitive
	if r.meta.PrimitiveDecode(p, &inner) != nil {
		return 0, 0
	}
	for _, q := range inner {
		if l, c := r.place(q); l > 0 && (line == 0 || l < line || l == line && c < column) {
			line, column = l, c
		}
	}
	return line, column
}

// column counts characters, as editors do, up to the mark that opens a value
// or the header of a table: the decoder counts bytes and stands behind it.
func (r *reader) column(at toml.Position) int {
	if at.Line > len(r.lines) {
		return at.Col
	}
	line := r.lines[at.Line-1]
	before := line[:min(max(at.Col-1, 0), len(line))]
	if body := strings.TrimLeft(line, " \t"); strings.HasPrefix(body, "[") {
		before = line[:len(line)-len(body)]
	}
	return 1 + utf8.RuneCountInString(strings.TrimRight(before, "[\"'"))
}

// fail records the first problem, at the key path.
func (r *reader) fail(path []string, remedy, problem string, args ...any) {
	if r.err != nil {
		return
	}
	line, column := r.position(path)
	r.err = &FileError{File: r.file, Line: line, Column: column, Problem: fmt.Sprintf(problem, args...), Remedy: remedy}
}

func (t table) at(key string) []string {
	return append(append(make([]string, 0, len(t.path)+1), t.path...), key)
}

func (t table) fail(key, remedy, problem string, args ...any) {
	t.r.fail(t.at(key), remedy, problem, args...)
}

func dotted(path []string) string { return toml.Key(path).String() }

func (t table) has(key string) bool { _, ok := t.m[key]; return ok }

// keys returns the keys of the table in alphabetical order.
func (t table) keys() []string {
	out := make([]string, 0, len(t.m))
	for k := range t.m {
		out = append(out, k)
	}
	sort.Strings(out)
	return out
}

func kind(v any) string {
	switch v.(type) {
	case string:
		return "a text"
	case int64, float64:
		return "a number"
	case bool:
		return "true or false"
	case map[string]any:
		return "a table"
	case []any:
		return "a list"
	case []map[string]any:
		return "a list of tables"
	}
	return "a date or time"
}

func (t table) wrong(key string, v any, want string) {
	t.fail(key, "write "+want, "%s is %s, not %s", dotted(t.at(key)), kind(v), want)
}

// text returns a text, "" when absent.
func (t table) text(key string) string {
	v, ok := t.m[key]
	if !ok {
		return ""
	}
	s, ok := v.(string)
	if !ok {
		t.wrong(key, v, "a text in quotes")
	}
	return s
}

// number returns a finite number and whether the key is there.
func (t table) number(key string) (float64, bool) {
	v, ok := t.m[key]
	if !ok {
		return 0, false
	}
	x, ok := toNumber(v)
	if !ok {
		t.wrong(key, v, "a number")
		return 0, true
	}
	if math.IsNaN(x) || math.IsInf(x, 0) {
		t.fail(key, "write a finite number", "%s = %v is not finite", dotted(t.at(key)), x)
		return 0, true
	}
	return x, true
}

func toNumber(v any) (float64, bool) {
	switch x := v.(type) {
	case float64:
		return x, true
	case int64:
		return float64(x), true
	}
	return 0, false
}

// count returns a whole number from 1 to max, or otherwise when absent.
func (t table) count(key string, otherwise, max int) int {
	v, ok := t.m[key]
	if !ok {
		return otherwise
	}
	n, ok := v.(int64)
	if !ok {
		t.wrong(key, v, "a whole number")
		return otherwise
	}
	if n < 1 || n > int64(max) {
		t.fail(key, fmt.Sprintf("write a whole number from 1 to %d", max), "%s = %d is out of range", dotted(t.at(key)), n)
		return otherwise
	}
	return int(n)
}

// truth returns true or false, false when absent.
func (t table) truth(key string) bool {
	v, ok := t.m[key]
	if !ok {
		return false
	}
	b, ok := v.(bool)
	if !ok {
		t.wrong(key, v, "true or false")
	}
	return b
}

// texts returns a list of texts, nil when absent.
func (t table) texts(key string) []string {
	v, ok := t.m[key]
	if !ok {
		return nil
	}
	list, ok := v.([]any)
	if !ok {
		t.wrong(key, v, "a list of texts")
		return nil
	}
	out := make([]string, 0, len(list))
	for i, item := range list {
		s, ok := item.(string)
		if !ok {
			t.fail(key, "write a list of texts in quotes", "item %d of %s is %s, not a text", i+1, dotted(t.at(key)), kind(item))
			return nil
		}
		out = append(out, s)
	}
	return out
}

// numbers returns a list of finite numbers, nil when absent.
func (t table) numbers(key string) []float64 {
	v, ok := t.m[key]
	if !ok {
		return nil
	}
	list, ok := v.([]any)
	if !ok {
		t.wrong(key, v, "a list of numbers")
		return nil
	}
	out := make([]float64, 0, len(list))
	for i, item := range list {
		x, ok := toNumber(item)
		if !ok || math.IsNaN(x) || math.IsInf(x, 0) {
			t.fail(key, "write a list of finite numbers", "item %d of %s is not a finite number", i+1, dotted(t.at(key)))
			return nil
		}
		out = append(out, x)
	}
	return out
}

// table returns the table under key, empty when absent.
func (t table) table(key string) table {
	sub := table{r: t.r, path: t.at(key)}
	v, ok := t.m[key]
	if !ok {
		return sub
	}
	m, ok := v.(map[string]any)
	if !ok {
		t.wrong(key, v, "a table")
		return sub
	}
	sub.m = m
	return sub
}

// only reports the first key, in alphabetical order, that the table may not
// have.
func (t table) only(known ...string) {
	for _, key := range t.keys() {
		if !slices.Contains(known, key) {
			t.fail(key, "remove it or correct its spelling: known here are "+strings.Join(known, ", "), "unknown key %s", dotted(t.at(key)))
		}
	}
}
