package typeset

import (
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"
)

type nodeKind uint8

const (
	run nodeKind = iota
	lower
	upper
	italic
	bold
	barred
)

// node is a piece of text, or what a mark holds.
type node struct {
	kind nodeKind
	text string
	kids []node
}

// deepest is how deep marks may nest; deeper ones are printed as they stand.
const deepest = 8

// MarkupError says what is wrong with a label.
type MarkupError struct {
	Markup  string
	Column  int // counted in letters from 1
	Problem string
	Remedy  string
}

func (e *MarkupError) Error() string {
	return fmt.Sprintf("label %q, column %d: %s; %s", e.Markup, e.Column, e.Problem, e.Remedy)
}

// Check is nil if every mark in the markup is complete, else a *MarkupError. A label with an error can still be laid out.
func Check(markup string) error {
	p := parser{text: markup}
	p.nodes(0, 0)
	if p.err == nil {
		return nil
	}
	return p.err
}

type parser struct {
	text string
	at   int
	err  *MarkupError
}

func (p *parser) fail(at int, problem, remedy string) {
	if p.err == nil {
		p.err = &MarkupError{p.text, utf8.RuneCountInString(p.text[:at]) + 1, problem, remedy}
	}
}

// Marks whose end nodes looks for.
const (
	untilBrace = 1 << iota
	untilStar
	untilStars
)

// nodes reads up to the end that until names, and past it, or to the end of the text.
func (p *parser) nodes(until, depth int) (list []node) {
	var plain strings.Builder
	flush := func() {
		if plain.Len() > 0 {
			list = append(list, node{kind: run, text: plain.String()})
			plain.Reset()
		}
	}
	for p.at < len(p.text) {
		rest := p.text[p.at:]
		switch {
		case rest[0] == '\\' && len(rest) > 1 && strings.IndexByte(`\_^*{}`, rest[1]) >= 0:
			plain.WriteByte(rest[1])
			p.at += 2
			continue
		case rest[0] == '}' && until == untilBrace:
			p.at++
			flush()
			return list
		case rest[0] == '*' && until == untilStar && !strings.HasPrefix(rest, "**"),
			rest[0] == '*' && until == untilStar && strings.HasPrefix(rest, "***"):
			p.at++
			flush()
			return list
		case strings.HasPrefix(rest, "**") && until == untilStars:
			p.at += 2
			flush()
			return list
		}
		kind, skip, end := run, 0, untilBrace
		switch {
		case strings.HasPrefix(rest, "_{"):
			kind, skip = lower, 2
		case strings.HasPrefix(rest, "^{"):
			kind, skip = upper, 2
		case strings.HasPrefix(rest, `\overline{`):
			kind, skip = barred, len(`\overline{`)
		case rest[0] == '*' && p.starOpens():
			if strings.HasPrefix(rest, "**") {
				kind, skip, end = bold, 2, untilStars
			} else {
				kind, skip, end = italic, 1, untilStar
			}
		}
		if kind != run {
			if kids, ok := p.marked(skip, end, depth); ok {
				flush()
				list = append(list, node{kind: kind, kids: kids})
				continue
			}
			plain.WriteString(rest[:skip])
			p.at += skip
			continue
		}
		_, n := utf8.DecodeRuneInString(rest)
		plain.WriteString(rest[:n])
		p.at += n
	}
	flush()
	return list
}

// starOpens says whether the star here may begin italics or bold: not after a letter or digit, and not before a space.
func (p *parser) starOpens() bool {
	before, _ := utf8.DecodeLastRuneInString(p.text[:p.at])
	if unicode.IsLetter(before) || unicode.IsNumber(before) {
		return false
	}
	after, _ := utf8.DecodeRuneInString(strings.TrimLeft(p.text[p.at:], "*"))
	return after != utf8.RuneError && !unicode.IsSpace(after)
}

// marked reads what a mark of skip bytes holds. If its end is missing the parser stays where it is.
func (p *parser) marked(skip, end, depth int) ([]node, bool) {
	at := p.at
	if depth >= deepest {
		p.fail(at, fmt.Sprintf("marks nest more than %d deep", deepest), "write it with fewer levels")
		return nil, false
	}
	if !closes(p.text[at+skip:], end) {
		switch end {
		case untilBrace:
			p.fail(at, fmt.Sprintf("no } ends %q", p.text[at:at+skip]), `add the }, or write \ before the sign to print it`)
		default:
			p.fail(at, "no second star ends the star here", `add it, or write \* to print a star`)
		}
		return nil, false
	}
	p.at += skip
	return p.nodes(end, depth+1), true
}

// closes says whether the mark just opened is ended in s, at its own level of braces.
func closes(s string, end int) bool {
	level := 0
	for i := 0; i < len(s); i++ {
		switch s[i] {
		case '\\':
			if i+1 < len(s) && strings.IndexByte(`\_^*{}`, s[i+1]) >= 0 {
				i++
			}
		case '{':
			if i > 0 && (s[i-1] == '_' || s[i-1] == '^' || strings.HasSuffix(s[:i], `\overline`)) {
				level++
			}
		case '}':
			if level == 0 {
				return end == untilBrace
			}
			level--
		case '*':
			if level > 0 || end == untilBrace {
				continue
			}
			stars := 1
			for i+stars < len(s) && s[i+stars] == '*' {
				stars++
			}
			if i > 0 && (end == untilStar && stars != 2 || end == untilStars && stars >= 2) {
				return true
			}
			i += stars - 1
		}
	}
	return false
}

// Escape is a markup that prints s as it stands.
func Escape(s string) string {
	if !strings.ContainsAny(s, `\_^*{}`) {
		return s
	}
	var b strings.Builder
	for i := 0; i < len(s); i++ {
		if strings.IndexByte(`\_^*{}`, s[i]) >= 0 {
			b.WriteByte('\\')
		}
		b.WriteByte(s[i])
	}
	return b.String()
}
