package zone

import (
	"fmt"
	"math"
	"strconv"
	"unicode"
	"unicode/utf8"
)

// expression is an arithmetic expression of the tables of special points, such
// as "(1+c^2/a^2)/4", ready to be evaluated.
type expression func(variables map[string]float64) float64

// functions that expressions may call, angles in radians.
var functions = map[string]func(float64) float64{
	"sin": math.Sin, "cos": math.Cos, "tan": math.Tan, "sqrt": math.Sqrt,
}

// parseExpression reads an expression. Names must be among known. The operators
// bind as usual: ^ before the sign before * and / before + and −; ^ groups from
// the right, the others from the left.
func parseExpression(text string, known map[string]bool) (expression, error) {
	p := &expressionParser{text: text, known: known}
	e, err := p.sum()
	if err != nil {
		return nil, err
	}
	if p.skip(); p.at < len(p.text) {
		return nil, p.fault("unexpected %q", p.rest())
	}
	return e, nil
}

type expressionParser struct {
	text  string
	at    int
	depth int
	known map[string]bool
}

// deepest bounds the nesting, so that no text exhausts the stack.
const deepest = 100

func (p *expressionParser) fault(format string, args ...any) error {
	return fmt.Errorf("expression %q, column %d: %s", p.text, utf8.RuneCountInString(p.text[:p.at])+1, fmt.Sprintf(format, args...))
}

func (p *expressionParser) rest() string {
	_, n := utf8.DecodeRuneInString(p.text[p.at:])
	return p.text[p.at : p.at+n]
}

func (p *expressionParser) skip() {
	for p.at < len(p.text) && p.text[p.at] == ' ' {
		p.at++
	}
}

// take consumes c if it comes next.
func (p *expressionParser) take(c byte) bool {
	p.skip()
	if p.at < len(p.text) && p.text[p.at] == c {
		p.at++
		return true
	}
	return false
}

func (p *expressionParser) sum() (expression, error) {
	left, err := p.product()
	for err == nil {
		l := left
		var right expression
		switch {
		case p.take('+'):
			if right, err = p.product(); err == nil {
				left = func(v map[string]float64) float64 { return l(v) + right(v) }
			}
		case p.take('-'):
			if right, err = p.product(); err == nil {
				left = func(v map[string]float64) float64 { return l(v) - right(v) }
			}
		default:
			return left, nil
		}
	}
	return nil, err
}

func (p *expressionParser) product() (expression, error) {
	left, err := p.signed()
	for err == nil {
		l := left
		var right expression
		switch {
		case p.take('*'):
			if right, err = p.signed(); err == nil {
				left = func(v map[string]float64) float64 { return l(v) * right(v) }
			}
		case p.take('/'):
			if right, err = p.signed(); err == nil {
				left = func(v map[string]float64) float64 { return l(v) / right(v) }
			}
		default:
			return left, nil
		}
	}
	return nil, err
}

func (p *expressionParser) signed() (expression, error) {
	if p.depth++; p.depth > deepest {
		return nil, p.fault("nested more than %d deep", deepest)
	}
	defer func() { p.depth-- }()
	if p.take('-') {
		e, err := p.signed()
		if err != nil {
			return nil, err
		}
		return func(v map[string]float64) float64 { return -e(v) }, nil
	}
	base, err := p.operand()
	if err != nil || !p.take('^') {
		return base, err
	}
	exponent, err := p.signed()
	if err != nil {
		return nil, err
	}
	return func(v map[string]float64) float64 { return math.Pow(base(v), exponent(v)) }, nil
}

func (p *expressionParser) operand() (expression, error) {
	if p.take('(') {
		return p.closed()
	}
	p.skip()
	start := p.at
	for p.at < len(p.text) && (p.text[p.at] >= '0' && p.text[p.at] <= '9' || p.text[p.at] == '.') {
		p.at++
	}
	if p.at > start {
		x, err := strconv.ParseFloat(p.text[start:p.at], 64)
		if err != nil {
			number := p.text[start:p.at]
			p.at = start
			return nil, p.fault("%q is not a number", number)
		}
		return func(map[string]float64) float64 { return x }, nil
	}
	for p.at < len(p.text) && (p.text[p.at] == '_' || unicode.IsLetter(rune(p.text[p.at])) || p.at > start && unicode.IsDigit(rune(p.text[p.at]))) {
		p.at++
	}
	name := p.text[start:p.at]
	if name == "" {
		if p.at == len(p.text) {
			return nil, p.fault("ends where a number, a name or ( should follow")
		}
		return nil, p.fault("unexpected %q", p.rest())
	}
	if f, ok := functions[name]; ok {
		if !p.take('(') {
			return nil, p.fault("( should follow %s", name)
		}
		e, err := p.closed()
		if err != nil {
			return nil, err
		}
		return func(v map[string]float64) float64 { return f(e(v)) }, nil
	}
	if !p.known[name] {
		p.at = start
		return nil, p.fault("unknown name %q", name)
	}
	return func(v map[string]float64) float64 { return v[name] }, nil
}

// closed reads what follows an opening parenthesis.
func (p *expressionParser) closed() (expression, error) {
	e, err := p.sum()
	if err != nil {
		return nil, err
	}
	if !p.take(')') {
		return nil, p.fault(") is missing")
	}
	return e, nil
}
