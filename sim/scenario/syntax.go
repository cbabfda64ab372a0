package scenario

import (
	"fmt"
	"strconv"
	"strings"
	"unicode/utf16"
	"unicode/utf8"
)

// A file becomes a tree whose nodes know where in the text they stand. The
// grammar is that of RFC 8259, kept strictly, with two kindnesses: words that other languages
// write for values (NaN, None, True) and malformed numbers become nodes of kind bad, so that the
// rest of the file can still be judged and everything reported at once.

type kind uint8

const (
	null kind = iota
	boolean
	number
	str
	list
	object
	bad // reported by whoever meets it, with text as the reason
)

// String returns the kind as sentences call it.
func (k kind) String() string {
	return [...]string{"null", "true or false", "a number", "text", "a list", "an object", "no JSON value"}[k]
}

type node struct {
	kind  kind
	at    int32  // byte offset of its first character
	text  string // of a text, its value; of a number and a boolean, as written; of a bad node, the fault
	keys  []key  // of an object, as many as items, duplicates included
	items []node
}

type key struct {
	name string
	at   int32
}

// index returns the place of the first member with this name, −1 if there is none.
func (n *node) index(name string) int {
	for i := range n.keys {
		if n.keys[i].name == name {
			return i
		}
	}
	return -1
}

// get returns the first member with this name.
func (n *node) get(name string) *node {
	if i := n.index(name); i >= 0 {
		return &n.items[i]
	}
	return nil
}

// syntaxError is a fault after which nothing more of the text can be understood.
type syntaxError struct {
	at   int
	text string
}

// maxFields bounds the fields of one object, far above what any has, so that looking for duplicates stays cheap.
const maxFields = 100

type scanner struct {
	text   string
	at     int
	depth  int
	values int
}

// parseTree reads a whole text. The nodes hold parts of it, not copies.
func parseTree(text string) (root node, fault *syntaxError) {
	s := scanner{text: text}
	defer func() {
		switch r := recover().(type) {
		case nil:
		case syntaxError: // thrown by fail, nowhere else
			fault = &r
		default:
			panic(r)
		}
	}()
	if len(text) > MaxBytes {
		s.fail(0, "the file is longer than %d MB", MaxBytes>>20)
	}
	if strings.HasPrefix(text, "\uFEFF") {
		s.fail(0, "the file starts with a byte order mark; save it as UTF-8 without one")
	}
	if !utf8.ValidString(text) {
		for i := 0; ; {
			r, n := utf8.DecodeRuneInString(text[i:])
			if r == utf8.RuneError && n == 1 {
				s.fail(i, "the file is not UTF-8 text here")
			}
			i += n
		}
	}
	s.space()
	if s.at == len(text) {
		s.fail(0, "the file is empty")
	}
	root = s.value()
	s.space()
	if s.at < len(text) {
		s.fail(s.at, "the file goes on after its end: %s", s.here())
	}
	return root, nil
}

func (s *scanner) fail(at int, format string, args ...any) {
	panic(syntaxError{at, fmt.Sprintf(format, args...)})
}

// here names the character at hand.
func (s *scanner) here() string {
	if s.at >= len(s.text) {
		return "the end of the file"
	}
	r, _ := utf8.DecodeRuneInString(s.text[s.at:])
	return strconv.QuoteRune(r)
}

func (s *scanner) space() {
	for s.at < len(s.text) {
		switch s.text[s.at] {
		case ' ', '\t', '\n', '\r':
			s.at++
		case '/', '#':
			s.fail(s.at, "JSON has no comments; %s cannot stand here", s.here())
		default:
			return
		}
	}
}

// peek returns the next character after white space, 0 at the end.
func (s *scanner) peek() byte {
	s.space()
	if s.at < len(s.text) {
		return s.text[s.at]
	}
	return 0
}

func (s *scanner) value() node {
	if s.values++; s.values > MaxValues {
		s.fail(s.at, "the file holds more than %d values", MaxValues)
	}
	at := s.at
	switch c := s.peek(); {
	case c == '{' || c == '[':
		if s.depth++; s.depth > MaxDepth {
			s.fail(s.at, "the file nests more than %d levels deep", MaxDepth)
		}
		var n node
		if c == '{' {
			n = s.object()
		} else {
			n = s.list()
		}
		s.depth--
		return n
	case c == '"':
		return node{kind: str, at: int32(at), text: s.string()}
	case c == '\'' || c == '`':
		s.fail(s.at, "text stands in double quotes, not in %c", c)
	case c == '-' || c == '+' || c == '.' || isWord(c):
		return s.word()
	}
	s.fail(s.at, "a value was expected, not %s", s.here())
	return node{}
}

func (s *scanner) object() node {
	n := node{kind: object, at: int32(s.at)}
	s.at++
	for s.peek() != '}' {
		if len(n.items) > 0 {
			s.comma('}')
		}
		if len(n.items) == maxFields {
			s.fail(s.at, "an object holds more than %d fields", maxFields)
		}
		at := s.at
		switch c := s.peek(); {
		case c == '"':
		case isWord(c) || c == '\'':
			s.fail(s.at, "the name of a field stands in double quotes; %s cannot stand here", s.here())
		default:
			s.fail(s.at, "the name of a field was expected, not %s", s.here())
		}
		name := s.string()
		if s.peek() != ':' {
			s.fail(s.at, "a colon was expected after %s, not %s", strconv.Quote(name), s.here())
		}
		s.at++
		s.space()
		n.keys = append(n.keys, key{name, int32(at)})
		n.items = append(n.items, s.value())
	}
	s.at++
	return n
}

func (s *scanner) list() node {
	n := node{kind: list, at: int32(s.at)}
	s.at++
	for s.peek() != ']' {
		if len(n.items) > 0 {
			s.comma(']')
		}
		n.items = append(n.items, s.value())
	}
	s.at++
	return n
}

// comma reads the comma before the next member, which must follow.
func (s *scanner) comma(end byte) {
	if s.peek() != ',' {
		s.fail(s.at, "a comma or %c was expected, not %s", end, s.here())
	}
	at := s.at
	s.at++
	if s.peek() == end {
		s.fail(at, "a comma too many before %c", end)
	}
}

func isWord(c byte) bool {
	return c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c >= '0' && c <= '9' || c == '_'
}

// word reads a literal or a number.
func (s *scanner) word() node {
	at := s.at
	for s.at < len(s.text) && (isWord(s.text[s.at]) || strings.IndexByte("+-.", s.text[s.at]) >= 0) {
		s.at++
	}
	w := s.text[at:s.at]
	n := node{at: int32(at), text: w}
	switch {
	case w == "null":
		n.kind = null
	case w == "true" || w == "false":
		n.kind = boolean
	case isNumber(w):
		n.kind = number
		if _, err := strconv.ParseFloat(w, 64); err != nil {
			n.kind, n.text = bad, "%s is too large a number: "+shorten(w)
		}
	default:
		n.kind = bad
		switch l := strings.ToLower(strings.TrimLeft(w, "+-")); {
		case l == "true" || l == "false" || l == "null":
			n.text = "%s is written " + l + " in JSON, not " + shorten(w)
		case l == "nan" || l == "inf" || l == "infinity":
			n.text = "%s must be a finite number; it is " + shorten(w)
		case strings.ContainsAny(w[:1], "+-.0123456789"):
			n.text = "%s is not a number as JSON writes it: " + shorten(w)
		default:
			n.text = "%s is a word without quotes: " + shorten(w)
		}
	}
	return n
}

// isNumber reports whether w is a number of RFC 8259: -?(0|[1-9][0-9]*)(\.[0-9]+)?([eE][+-]?[0-9]+)?
func isNumber(w string) bool {
	w = strings.TrimPrefix(w, "-")
	digits := func() int {
		n := 0
		for n < len(w) && w[n] >= '0' && w[n] <= '9' {
			n++
		}
		return n
	}
	n := digits()
	if n == 0 || n > 1 && w[0] == '0' {
		return false
	}
	w = w[n:]
	if strings.HasPrefix(w, ".") {
		w = w[1:]
		if n = digits(); n == 0 {
			return false
		}
		w = w[n:]
	}
	if w != "" && (w[0] == 'e' || w[0] == 'E') {
		w = w[1:]
		if w != "" && (w[0] == '+' || w[0] == '-') {
			w = w[1:]
		}
		if n = digits(); n == 0 {
			return false
		}
		w = w[n:]
	}
	return w == ""
}

func shorten(w string) string {
	if len(w) > 24 {
		return w[:24] + "…"
	}
	return w
}

// string reads a text in double quotes and returns its value.
func (s *scanner) string() string {
	start := s.at
	s.at++
	from := s.at
	for s.at < len(s.text) && s.text[s.at] != '"' && s.text[s.at] != '\\' && s.text[s.at] >= ' ' {
		s.at++
	}
	if s.at < len(s.text) && s.text[s.at] == '"' { // nothing escaped: the usual case
		s.at++
		return s.text[from : s.at-1]
	}
	b := append([]byte(nil), s.text[from:s.at]...)
	for {
		if s.at >= len(s.text) {
			s.fail(start, "a text has no closing quote")
		}
		switch c := s.text[s.at]; {
		case c == '"':
			s.at++
			return string(b)
		case c == '\n' || c == '\r':
			s.fail(start, "a text has no closing quote on its line")
		case c < ' ':
			s.fail(s.at, "a text holds a control character, %s; escape it", s.here())
		case c == '\\':
			b = s.escape(b)
		default:
			b = append(b, c)
			s.at++
		}
	}
}

func (s *scanner) escape(b []byte) []byte {
	at := s.at
	s.at++
	if s.at >= len(s.text) {
		s.fail(at, "a text has no closing quote")
	}
	c := s.text[s.at]
	if i := strings.IndexByte(`"\/bfnrt`, c); i >= 0 {
		s.at++
		return append(b, "\"\\/\b\f\n\r\t"[i])
	}
	if c != 'u' {
		s.fail(at, "a text holds \\%s, which means nothing in JSON", strings.Trim(s.here(), "'"))
	}
	s.at--
	r := s.unit()
	if utf16.IsSurrogate(r) {
		pair := rune(utf8.RuneError)
		if s.at < len(s.text) && s.text[s.at] == '\\' {
			pair = utf16.DecodeRune(r, s.unit())
		}
		if pair == utf8.RuneError {
			s.fail(at, "a text holds half of a surrogate pair")
		}
		r = pair
	}
	return utf8.AppendRune(b, r)
}

// unit reads \uXXXX.
func (s *scanner) unit() rune {
	at := s.at
	if at+6 <= len(s.text) && s.text[at+1] == 'u' {
		if v, err := strconv.ParseUint(s.text[at+2:at+6], 16, 32); err == nil {
			s.at += 6
			return rune(v)
		}
	}
	s.fail(at, "\\u in a text is followed by four hexadecimal digits")
	return 0
}
