package main

import (
	"context"
	"encoding/json"
	"fmt"
	"io"
	"strings"
	"unicode"
)

// output is a writer that remembers its first failure, so that a full disk below
// a redirected result does not pass in silence.
type output struct {
	io.Writer
	failed error
}

func (o *output) Write(text []byte) (int, error) {
	n, err := o.Writer.Write(text)
	if err != nil && o.failed == nil {
		o.failed = err
	}
	return n, err
}

// printJSON writes the one document of a --json run.
func (p *program) printJSON(document any) error {
	encoder := json.NewEncoder(p.out)
	encoder.SetEscapeHTML(false)
	encoder.SetIndent("", "  ")
	return encoder.Encode(document)
}

// printf writes a line for people.
func (p *program) printf(format string, args ...any) {
	fmt.Fprintln(p.out, printable(fmt.Sprintf(format, args...)))
}

// notef writes a message beside the result.
func (p *program) notef(format string, args ...any) {
	fmt.Fprintln(p.errOut, printable(fmt.Sprintf(format, args...)))
}

// printable returns the text with a mark for every character that would steer the
// terminal instead of showing: names and bins come from other people's files.
func printable(text string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case r == '\n':
			return r
		case unicode.IsControl(r), unicode.Is(unicode.Bidi_Control, r), r == '\u2028', r == '\u2029':
			return unicode.ReplacementChar
		}
		return r
	}, text)
}

// interruptible returns a reader that ends with the context's error as soon as
// the context does, even while nothing comes in: an interrupt must end a run that
// waits for someone to type.
func interruptible(ctx context.Context, from io.Reader) io.Reader {
	reader, writer := io.Pipe()
	context.AfterFunc(ctx, func() { writer.CloseWithError(ctx.Err()) })
	var started bool
	return readerFunc(func(into []byte) (int, error) {
		if !started {
			started = true
			go func() {
				_, err := io.Copy(writer, from)
				writer.CloseWithError(err)
			}()
		}
		return reader.Read(into)
	})
}

type readerFunc func([]byte) (int, error)

func (f readerFunc) Read(into []byte) (int, error) { return f(into) }

// counted returns the number with its noun, in the plural where it is not one.
func counted[N int | int64](n N, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}
