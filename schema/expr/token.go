package expr

import (
	"fmt"
	"strings"
	"unicode/utf8"

	"betaloom/schema/quantity"
)

// kind is the kind of a token.
type kind uint8

const (
	atEnd kind = iota
	number
	word // a name, a unit or one of and, or, not
	sign // an operator, a parenthesis or a comma
)

type token struct {
	kind   kind
	offset int
	text   string
}

// is reports whether the token is this operator or keyword.
func (t token) is(text string) bool {
	return t.text == text && (t.kind == sign || t.kind == word)
}

// found describes the token for a message.
func (t token) found() string {
	if t.kind == atEnd {
		return "the end"
	}
	return quantity.Excerpt(t.text)
}

// signs lists the operators, those of two characters before their starts.
var signs = []string{"<=", ">=", "==", "!=", "<", ">", "+", "-", "*", "/", "^", "(", ")", ","}

// scan cuts the source into tokens; the last one is atEnd.
func scan(src string) ([]token, error) {
	var tokens []token
	for i := 0; i < len(src); {
		if strings.IndexByte(" \t\r\n", src[i]) >= 0 {
			i++
			continue
		}
		t, err := scanOne(src, i)
		if err != nil {
			return nil, err
		}
		tokens = append(tokens, t)
		i += len(t.text)
	}
	return append(tokens, token{kind: atEnd, offset: len(src)}), nil
}

func scanOne(src string, i int) (token, error) {
	rest := src[i:]
	if n := quantity.NumberLength(rest); n > 0 && rest[0] != '+' && rest[0] != '-' {
		return token{number, i, rest[:n]}, nil
	}
	if n := wordLength(rest); n > 0 {
		return token{word, i, rest[:n]}, nil
	}
	for _, s := range signs {
		if strings.HasPrefix(rest, s) && !strings.HasPrefix(rest, "**") {
			return token{sign, i, s}, nil
		}
	}
	_, size := utf8.DecodeRuneInString(rest)
	return token{}, &Error{Offset: i, Found: fmt.Sprintf("%q", rest[:size]), Expected: instead(rest)}
}

// instead says what to write for signs of other languages.
func instead(rest string) string {
	for _, s := range []struct{ theirs, ours string }{
		{"**", "^ for a power"}, {"=", "== to compare"}, {"&", "and"}, {"|", "or"}, {"!", "not"},
		{"\u00b5", "u for micro, as in um"}, {"\u03bc", "u for micro, as in um"}, {"\u03c0", "pi"},
	} {
		if strings.HasPrefix(rest, s.theirs) {
			return s.ours
		}
	}
	return "a number, a name, an operator or a parenthesis"
}

func wordLength(s string) int {
	i := 0
	for i < len(s) && (s[i]|0x20 >= 'a' && s[i]|0x20 <= 'z' || s[i] == '_' || i > 0 && s[i] >= '0' && s[i] <= '9') {
		i++
	}
	return i
}
