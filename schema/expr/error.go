package expr

import "fmt"

// Error says where and why an expression cannot be read, checked or
// evaluated.
type Error struct {
	Offset   int // in bytes from the start of the source
	Found    string
	Expected string
	Name     string // the unknown name, where that is what is wrong
}

func (e *Error) Error() string {
	return fmt.Sprintf("expression, byte %d: found %s, expected %s", e.Offset, e.Found, e.Expected)
}
