package doc

import (
	"errors"
	"fmt"
	"math"
	"sort"
	"strconv"
	"strings"
	"unicode/utf8"

	"github.com/BurntSushi/toml"
)

// reader walks a study key by key and gathers every problem with its place.
type reader struct {
	file   string
	at     map[string]place
	list   []*Problem
	failed map[string]bool // keys with a problem already
}

// table is one table of the file; m is nil when it is absent.
type table struct {
	r    *reader
	name string
	m    map[string]any
	used map[string]bool
}

// open parses the TOML. A text that is none has a single problem.
func open(file string, data []byte) (*reader, table) {
	r := &reader{file: file, failed: map[string]bool{}}
	if i := strings.IndexByte(string(data), 0); i >= 0 {
		r.list = append(r.list, &Problem{File: file, Line: 1 + strings.Count(string(data[:i]), "\n"),
			Problem: "the file holds a zero byte and is no text", Remedy: "give a study: a TOML text in UTF-8"})
		return r, table{}
	}
	text := strings.TrimPrefix(string(data), "\ufeff")
	m := map[string]any{}
	if _, err := toml.Decode(text, &m); err != nil {
		p := &Problem{File: file, Problem: strings.TrimPrefix(err.Error(), "toml: "), Remedy: "write TOML: key = value, texts in quotes, each key once"}
		var pe toml.ParseError
		if errors.As(err, &pe) {
			p.Line, p.Column = syntaxPlace(text, pe)
			if pe.Message != "" {
				p.Problem = pe.Message
			}
		}
		r.list = append(r.list, p)
		return r, table{}
	}
	r.at = positions(text)
	return r, table{r: r, m: m, used: map[string]bool{}}
}

// syntaxPlace is where the text stops being TOML. The decoder counts a line
// break within the name of a table to the line behind it, and may count columns
// on beyond the end of a line.
func syntaxPlace(text string, pe toml.ParseError) (line, column int) {
	lines := strings.Split(text, "\n")
	line = min(max(pe.Position.Line, 1), len(lines))
	if line > 1 && strings.Contains(pe.Message, "table") && strings.Contains(pe.Message, `got '\n'`) {
		line--
		return line, utf8.RuneCountInString(strings.TrimRight(lines[line-1], "\r")) + 1
	}
	if strings.Contains(pe.Message, "already been defined") {
		return line, 1 // the decoder stands behind the second one
	}
	return line, min(max(pe.Position.Col, 1), utf8.RuneCountInString(lines[line-1])+1)
}

// fail notes a problem at a key, or at the nearest table around it that has a
// place.
func (r *reader) fail(name, remedy, problem string, args ...any) {
	if r.failed[name] {
		return
	}
	r.failed[name] = true
	at := r.at[name]
	for outer := name; at.line == 0 && outer != ""; at = r.at[outer] {
		if i := strings.LastIndexAny(outer, ".["); i >= 0 {
			outer = outer[:i]
		} else {
			outer = ""
		}
	}
	r.list = append(r.list, &Problem{File: r.file, Line: at.line, Column: at.column, Problem: fmt.Sprintf(problem, args...), Remedy: remedy})
}

// err returns the problems in the order of their lines, or nil.
func (r *reader) err() error {
	if len(r.list) == 0 {
		return nil
	}
	sort.SliceStable(r.list, func(i, j int) bool {
		a, b := r.list[i], r.list[j]
		return a.Line < b.Line || a.Line == b.Line && a.Column < b.Column
	})
	return &Problems{r.list}
}

func (t table) fail(key, remedy, problem string, args ...any) {
	t.r.fail(join(t.name, key), remedy, problem, args...)
}

func (t table) take(key string) (any, bool) {
	v, ok := t.m[key]
	if ok {
		t.used[key] = true
	}
	return v, ok
}

// unused notes the keys of the table that nobody asked for.
func (t table) unused() {
	var known, unknown []string
	for k := range t.m {
		if !t.used[k] {
			unknown = append(unknown, k)
		}
	}
	for k := range t.used {
		known = append(known, k)
	}
	sort.Strings(unknown)
	for _, k := range unknown {
		remedy := "remove it or correct its spelling"
		if near := nearest(k, append(known, t.mayHave()...)); near != "" {
			remedy = fmt.Sprintf("did you mean %q? Remove it or correct its spelling", near)
		}
		t.fail(k, remedy, "unknown key %s", join(t.name, k))
	}
}

// keysOf lists what each table may hold.
var keysOf = map[string][]string{
	"":        {"bandstudy", "title", "crystal", "model", "path", "mesh", "view", "pin"},
	"crystal": {"prototype", "elements", "a", "lattice", "site"},
	"site":    {"element", "label", "at"},
	"model":   {"kind", "set", "file", "spin_orbit", "factors"},
	"path":    {"legs", "frame", "step"},
	"mesh":    {"divisions"},
	"view":    {"colour", "zero", "window", "held", "level", "frame", "dos", "camera"},
	"pin":     {"A", "B"},
}

func (t table) mayHave() []string {
	name := t.name[strings.LastIndexByte(t.name, '.')+1:]
	if i := strings.IndexByte(name, '['); i >= 0 {
		name = name[:i]
	}
	return keysOf[name]
}

// nearest is the word that differs from a typed one in at most two letters.
func nearest(typed string, words []string) string {
	best, least := "", 3
	for _, w := range words {
		if d := distance(strings.ToLower(typed), strings.ToLower(w)); d < least && d < len(w) {
			best, least = w, d
		}
	}
	return best
}

// distance is the number of letters to insert, delete or replace
// (Levenshtein).
func distance(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		last := row[0]
		row[0] = i + 1
		for j := range len(b) {
			cost := last
			if a[i] != b[j] {
				cost++
			}
			last = row[j+1]
			row[j+1] = min(cost, row[j]+1, last+1)
		}
	}
	return row[len(b)]
}

func kindOf(v any) string {
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
	t.fail(key, "write "+want, "%s is %s, not %s", join(t.name, key), kindOf(v), want)
}

// text returns a text of one line, "" when absent.
func (t table) text(key string) string {
	v, ok := t.take(key)
	if !ok {
		return ""
	}
	s, ok := v.(string)
	switch {
	case !ok:
		t.wrong(key, v, "a text in quotes")
	case strings.ContainsAny(s, "\n\r"):
		t.fail(key, "write a single line", "%s has several lines", join(t.name, key))
	}
	return s
}

// choice returns a text that is one of a list, "" when absent.
func (t table) choice(key string, list []string) string {
	s := t.text(key)
	if s == "" {
		return ""
	}
	for _, c := range list {
		if c == s {
			return s
		}
	}
	t.fail(key, "write one of: "+strings.Join(list, ", "), "%s = %q is not known", join(t.name, key), s)
	return ""
}

// number returns a finite number and whether the key is there.
func (t table) number(key string) (float64, bool) {
	v, ok := t.take(key)
	if !ok {
		return 0, false
	}
	x, ok := toNumber(v)
	switch {
	case !ok:
		t.wrong(key, v, "a number")
	case math.IsNaN(x) || math.IsInf(x, 0):
		t.fail(key, "write a finite number", "%s = %v is not finite", join(t.name, key), x)
		x = 0
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

// truth returns true or false, false when absent.
func (t table) truth(key string) bool {
	v, ok := t.take(key)
	if !ok {
		return false
	}
	b, ok := v.(bool)
	if !ok {
		t.wrong(key, v, "true or false")
	}
	return b
}

// whole returns a whole number between two bounds, or otherwise when absent.
func (t table) whole(key string, least, most, otherwise int) int {
	v, ok := t.take(key)
	if !ok {
		return otherwise
	}
	n, ok := v.(int64)
	switch {
	case !ok:
		t.wrong(key, v, "a whole number")
	case n < int64(least) || n > int64(most):
		t.fail(key, fmt.Sprintf("write a whole number from %d to %d", least, most), "%s = %d is out of range", join(t.name, key), n)
	default:
		return int(n)
	}
	return otherwise
}

// texts returns a list of texts, nil when absent.
func (t table) texts(key string) []string {
	v, ok := t.take(key)
	if !ok {
		return nil
	}
	list, ok := v.([]any)
	if !ok {
		t.wrong(key, v, "a list of texts")
		return nil
	}
	var out []string
	for i, item := range list {
		s, ok := item.(string)
		if !ok {
			t.fail(key, "write a list of texts in quotes", "item %d of %s is %s, not a text", i+1, join(t.name, key), kindOf(item))
			return nil
		}
		out = append(out, s)
	}
	return out
}

// numbers fills dst from a list of as many finite numbers and says whether it
// did.
func (t table) numbers(key string, dst []float64) bool {
	v, ok := t.take(key)
	if !ok {
		return false
	}
	return t.fill(key, join(t.name, key), v, dst)
}

func (t table) fill(key, name string, v any, dst []float64) bool {
	list, ok := v.([]any)
	if !ok {
		t.wrong(key, v, fmt.Sprintf("a list of %d numbers", len(dst)))
		return false
	}
	if len(list) != len(dst) {
		t.fail(key, fmt.Sprintf("write %d numbers", len(dst)), "%s has %d items, not %d", name, len(list), len(dst))
		return false
	}
	for i, item := range list {
		x, ok := toNumber(item)
		if !ok || math.IsNaN(x) || math.IsInf(x, 0) {
			t.fail(key, "write finite numbers", "item %d of %s is not a finite number", i+1, name)
			return false
		}
		dst[i] = x
	}
	return true
}

// table returns the table under key; its m is nil when it is absent.
func (t table) table(key string) table {
	sub := table{r: t.r, name: join(t.name, key), used: map[string]bool{}}
	v, ok := t.take(key)
	if !ok {
		return sub
	}
	if sub.m, ok = v.(map[string]any); !ok {
		t.wrong(key, v, "a table")
	}
	return sub
}

// tables returns the elements of an array of tables.
func (t table) tables(key string) []table {
	v, ok := t.take(key)
	if !ok {
		return nil
	}
	var maps []map[string]any
	switch list := v.(type) {
	case []map[string]any:
		maps = list
	case []any:
		for _, item := range list {
			m, ok := item.(map[string]any)
			if !ok {
				t.wrong(key, v, "a list of tables")
				return nil
			}
			maps = append(maps, m)
		}
	default:
		t.wrong(key, v, "a list of tables")
		return nil
	}
	var out []table
	for i, m := range maps {
		out = append(out, table{r: t.r, name: join(t.name, key) + "[" + strconv.Itoa(i) + "]", m: m, used: map[string]bool{}})
	}
	return out
}
