package marking

import (
	"fmt"
	"unicode/utf8"
)

// Error is why a text could not be read as a quantity: where in it, and what to
// write instead.
type Error struct {
	Text    string // the whole text as given
	Column  int    // byte column of the first offending character, from 1; len(Text)+1 at its end
	Message string // what is wrong there and what to do
}

// longestText is the most bytes that a quantity is written in.
const longestText = 100

// checkLength refuses a text that is no quantity by its length alone, so that
// messages stay short.
func checkLength(text string) error {
	if len(text) <= longestText {
		return nil
	}
	return errorAt(text, longestText, "the text goes on for %d bytes, too long for a quantity", len(text))
}

// longestQuote is the most characters of a text that a message repeats.
const longestQuote = 40

func (e *Error) Error() string { return fmt.Sprintf("%s: %s", quoted(e.Text), e.Message) }

// Within returns the error as one about a longer text in which e.Text begins
// offset bytes in.
func (e *Error) Within(text string, offset int) *Error {
	return &Error{Text: text, Column: e.Column + offset, Message: e.Message}
}

// Errorf returns an Error about the byte at offset at (from 0) of text, for
// packages that read longer texts made of quantities.
func Errorf(text string, at int, format string, args ...any) error {
	return errorAt(text, at, format, args...)
}

// errorAt returns an Error about the byte at offset at (from 0) of text.
func errorAt(text string, at int, format string, args ...any) *Error {
	return &Error{Text: text, Column: at + 1, Message: fmt.Sprintf(format, args...)}
}

// quoted returns the text between quotes, shortened, with what does not print
// escaped.
func quoted(text string) string {
	if utf8.RuneCountInString(text) <= longestQuote {
		return fmt.Sprintf("%q", text)
	}
	end := 0
	for range longestQuote {
		_, size := utf8.DecodeRuneInString(text[end:])
		end += size
	}
	return fmt.Sprintf("%q", text[:end]+"…")
}

// characterAt returns the character at the offset for a message: quoted, or
// named where it is a byte outside UTF-8 or the end of the text.
func characterAt(text string, at int) string {
	if at >= len(text) {
		return "the end"
	}
	r, size := utf8.DecodeRuneInString(text[at:])
	if r == utf8.RuneError && size == 1 {
		return fmt.Sprintf("byte 0x%02X, which is not UTF-8 text,", text[at])
	}
	return fmt.Sprintf("%q", string(r))
}
