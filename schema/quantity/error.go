package quantity

import "fmt"

// Error says why a text is no quantity or no unit.
type Error struct {
	Text     string // the whole text, shortened where it is long
	Found    string
	Expected string
}

func (e *Error) Error() string {
	return fmt.Sprintf("quantity %s: found %s, expected %s", e.Text, e.Found, e.Expected)
}

func fail(text, found, expected string) *Error {
	return &Error{Text: Excerpt(text), Found: found, Expected: expected}
}

// Excerpt quotes s for a message, shortened to some 40 bytes.
func Excerpt(s string) string {
	const most = 40
	if len(s) > most {
		return fmt.Sprintf("%q...", s[:most])
	}
	return fmt.Sprintf("%q", s)
}
