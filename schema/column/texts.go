package column

import "github.com/apache/arrow/go/v17/parquet"

// Texts numbers the texts of String columns, so that a row holds a number
// instead of a string. Code 0 is a missing text; the empty text has it too.
type Texts struct {
	codes map[string]uint32
	list  []string
	bytes []parquet.ByteArray // the same, for a Writer
}

// NewTexts makes texts that hold the missing one only.
func NewTexts() *Texts {
	return &Texts{codes: map[string]uint32{"": 0}, list: []string{""}, bytes: []parquet.ByteArray{nil}}
}

// Code numbers a text.
func (t *Texts) Code(s string) uint32 {
	if code, ok := t.codes[s]; ok {
		return code
	}
	code := uint32(len(t.list))
	t.list = append(t.list, s)
	t.bytes = append(t.bytes, parquet.ByteArray(s))
	t.codes[s] = code
	return code
}

// CodeOf numbers the text that bytes hold; it copies them once per text.
func (t *Texts) CodeOf(b []byte) uint32 {
	if code, ok := t.codes[string(b)]; ok {
		return code
	}
	return t.Code(string(b))
}

// Text gives the text of a code.
func (t *Texts) Text(code uint32) string { return t.list[code] }

// Len counts the texts, the missing one included.
func (t *Texts) Len() int { return len(t.list) }

// Truncate forgets the texts of code n and above.
func (t *Texts) Truncate(n int) {
	for _, s := range t.list[n:] {
		delete(t.codes, s)
	}
	t.list, t.bytes = t.list[:n], t.bytes[:n]
}

// Known gives the code of a text that is numbered already.
func (t *Texts) Known(s string) (code uint32, ok bool) {
	code, ok = t.codes[s]
	return code, ok
}
