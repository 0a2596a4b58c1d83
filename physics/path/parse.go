package path

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"bandwright/physics/lattice"
)

// Error says what is wrong with the text of a path, where, and what to do.
type Error struct {
	Leg     int    // 0-based index of the leg text; -1 for the path as a whole
	Item    int    // 1-based number of the point in its leg; 0 for the leg as a whole
	Offset  int    // byte offset of the item in the leg text
	Text    string // the item as typed
	Problem string
	Remedy  string
}

func (e *Error) Error() string {
	where := "path"
	switch {
	case e.Leg >= 0:
		where = fmt.Sprintf("leg %d", e.Leg+1)
	case e.Text != "":
		return e.Problem + "; " + e.Remedy
	}
	if e.Item > 0 {
		where += fmt.Sprintf(", point %d (%s)", e.Item, e.Text)
	}
	return where + ": " + e.Problem + "; " + e.Remedy
}

// Parse reads a path. Each text is one run of points, or several with "|"
// between them: names ("Γ X W K", also "Γ–X–W–K"; Γ may be typed G or Gamma),
// or three numbers in the frame, plain or as "(0.5, 0.25, 0.75)"; fractions
// such as 3/8 are numbers too. The error is an *Error.
func Parse(legs []string, frame lattice.Frame, s lattice.Setting) (Path, error) {
	names := newNames(s)
	var p Path
	for i, text := range legs {
		items, perr := split(text)
		if perr != nil {
			perr.Leg = i
			return Path{}, perr
		}
		runs, perr := read(items, frame, s, names)
		if perr != nil {
			perr.Leg = i
			return Path{}, perr
		}
		p.Runs = append(p.Runs, runs...)
	}
	if len(p.Runs) == 0 {
		return Path{}, &Error{Leg: -1, Problem: "the path has no legs", Remedy: `give at least one, such as "Γ X"`}
	}
	return p, nil
}

// item is one point of a leg's text, or a break.
type item struct {
	text    string
	offset  int
	numbers [3]float64
	numeric bool
	breaks  bool
}

// read turns the items of one text into runs of points.
func read(items []item, frame lattice.Frame, s lattice.Setting, names names) ([][]Point, *Error) {
	var runs [][]Point
	var run []Point
	last := item{}
	count := 0
	finish := func() *Error {
		if len(run) == 0 {
			return &Error{Item: count, Offset: last.offset, Text: last.text, Problem: "no point beside a break", Remedy: "give two points or more on either side of |"}
		}
		if len(run) == 1 {
			return &Error{Item: count, Offset: last.offset, Text: last.text, Problem: "a run needs two points, and here is one", Remedy: "add the point where the run ends"}
		}
		runs = append(runs, run)
		run = nil
		return nil
	}
	for _, it := range items {
		if it.breaks {
			last = it
			if err := finish(); err != nil {
				return nil, err
			}
			continue
		}
		count++
		last = it
		fault := func(problem, remedy string) *Error {
			return &Error{Item: count, Offset: it.offset, Text: it.text, Problem: problem, Remedy: remedy}
		}
		point, problem, remedy := resolve(it, frame, s, names)
		if problem != "" {
			return nil, fault(problem, remedy)
		}
		if len(run) > 0 && distance(run[len(run)-1].K, point.K) < sameK {
			return nil, fault("the point is the same as the one before it", "remove one of the two, or put | between them")
		}
		run = append(run, point)
	}
	if len(items) == 0 {
		return nil, &Error{Problem: "the leg is empty", Remedy: `give two points or more, such as "Γ X", or remove it`}
	}
	if err := finish(); err != nil {
		return nil, err
	}
	return runs, nil
}

// resolve finds the k point of an item that is no break; a problem that is not
// empty says why there is none.
func resolve(it item, frame lattice.Frame, s lattice.Setting, names names) (p Point, problem, remedy string) {
	if it.numeric {
		k := s.ToFrac(frame, it.numbers)
		for _, x := range k {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				return Point{}, "the point is not finite in this frame", "give three finite numbers"
			}
		}
		return Point{Label: names.label(k, it.numbers), K: k}, "", ""
	}
	k, ok := names.find(it.text)
	switch {
	case !ok && names.err != nil:
		return Point{}, fmt.Sprintf("no special points are known here (%v)", names.err), "give the point as three numbers"
	case !ok:
		return Point{}, fmt.Sprintf("%s is not a special point of this lattice (%s)", it.text, s.Bravais),
			"those are " + names.list() + "; any other point can be given as three numbers"
	}
	return Point{Label: names.typographic(it.text), K: k}, "", ""
}

// ParsePoint reads a single point: a name, or three numbers in the frame. The
// error is an *Error.
func ParsePoint(text string, frame lattice.Frame, s lattice.Setting) (Point, error) {
	items, perr := split(text)
	if perr != nil {
		perr.Leg = -1
		return Point{}, perr
	}
	if len(items) != 1 || items[0].breaks {
		return Point{}, &Error{Leg: -1, Text: text, Problem: fmt.Sprintf("%q is not one point", text), Remedy: "give a name, or three numbers"}
	}
	p, problem, remedy := resolve(items[0], frame, s, newNames(s))
	if problem != "" {
		return Point{}, &Error{Leg: -1, Item: 1, Text: items[0].text, Problem: problem, Remedy: remedy}
	}
	return p, nil
}

// split cuts the text of a leg into points and breaks and gathers numbers in
// threes.
func split(text string) ([]item, *Error) {
	var items []item
	var pending []word // numbers of a triple that is not complete
	flush := func() *Error {
		if len(pending) == 0 {
			return nil
		}
		w := pending[0]
		return &Error{
			Item: points(items) + 1, Offset: w.offset, Text: joined(pending),
			Problem: fmt.Sprintf("a point needs three numbers, and here are %d", len(pending)),
			Remedy:  `write it as "0.5 0.25 0.75"`,
		}
	}
	for _, w := range words(text) {
		switch {
		case w.text == "|":
			if err := flush(); err != nil {
				return nil, err
			}
			items = append(items, item{text: "|", offset: w.offset, breaks: true})
		case w.numeric():
			x, err := number(w.text)
			if err != nil {
				return nil, &Error{Item: points(items) + 1, Offset: w.offset, Text: w.text, Problem: err.Error(), Remedy: "write a finite number such as 0.375 or 3/8"}
			}
			w.value = x
			pending = append(pending, w)
			if len(pending) == 3 {
				items = append(items, item{
					text: joined(pending), offset: pending[0].offset, numeric: true,
					numbers: [3]float64{pending[0].value, pending[1].value, pending[2].value},
				})
				pending = nil
			}
		default:
			if err := flush(); err != nil {
				return nil, err
			}
			items = append(items, item{text: w.text, offset: w.offset})
		}
	}
	if err := flush(); err != nil {
		return nil, err
	}
	return items, nil
}

func points(items []item) int {
	n := 0
	for _, it := range items {
		if !it.breaks {
			n++
		}
	}
	return n
}

// word is a piece of text between separators.
type word struct {
	text   string
	offset int
	value  float64
}

// numeric tells numbers from names: names begin with a letter. NaN and Inf
// count as numbers, so that they are refused as such.
func (w word) numeric() bool {
	switch strings.ToLower(strings.TrimLeft(w.text, "+-−")) {
	case "nan", "inf", "infinity":
		return true
	}
	r, _ := utf8.DecodeRuneInString(w.text)
	return unicode.IsDigit(r) || r == '.' || r == '-' || r == '+' || r == '−'
}

func joined(ws []word) string {
	texts := make([]string, len(ws))
	for i, w := range ws {
		texts[i] = w.text
	}
	return strings.Join(texts, " ")
}

// words cuts at blanks, commas, semicolons, brackets, dashes (–, —), arrows,
// and at a hyphen inside a name; "|" is a word of its own.
func words(text string) []word {
	var out []word
	start := -1
	end := func(i int) {
		if start >= 0 {
			out = append(out, word{text: text[start:i], offset: start})
			start = -1
		}
	}
	for i, r := range text {
		switch {
		case r == '|':
			end(i)
			out = append(out, word{text: "|", offset: i})
		case unicode.IsSpace(r) || strings.ContainsRune(",;()[]–—→", r):
			end(i)
		case r == '-' && start >= 0 && !(word{text: text[start:i]}).numeric():
			end(i)
		case start < 0:
			start = i
		}
	}
	end(len(text))
	return out
}

// number reads a decimal number or a fraction such as 3/8.
func number(text string) (float64, error) {
	text = strings.ReplaceAll(text, "−", "-")
	upper, lower, fraction := strings.Cut(text, "/")
	x, err := strconv.ParseFloat(upper, 64)
	if err != nil && !isRange(err) {
		return 0, fmt.Errorf("%s is not a number", text)
	}
	if fraction {
		y, err := strconv.ParseFloat(lower, 64)
		if err != nil {
			return 0, fmt.Errorf("%s is not a number", text)
		}
		x /= y
	}
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return 0, fmt.Errorf("%s is not a finite number", text)
	}
	return x, nil
}

func isRange(err error) bool {
	n, ok := err.(*strconv.NumError)
	return ok && n.Err == strconv.ErrRange
}
