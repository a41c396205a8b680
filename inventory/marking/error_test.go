package marking

import (
	"errors"
	"strings"
	"testing"
)

func TestErrorsQuoteTheTextShortened(t *testing.T) {
	_, err := ParseOhms("4x7")
	if want := `"4x7": "x" is no prefix or unit of a resistance; write it as 4k7, 4.7k or 4R7`; err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
	_, err = ParseOhms(strings.Repeat("µ", 300))
	if err == nil || !strings.HasPrefix(err.Error(), `"`+strings.Repeat("µ", 40)+`…":`) {
		t.Errorf("got %v", err)
	}
}

func TestErrorsMoveIntoALongerText(t *testing.T) {
	_, err := ParseOhms("4x7")
	var e *Error
	if !errors.As(err, &e) {
		t.Fatal(err)
	}
	moved := e.Within("ra=4x7 rb=10k", len("ra="))
	if moved.Text[moved.Column-1] != 'x' || moved.Message != e.Message || e.Text != "4x7" {
		t.Errorf("%+v from %+v", moved, e)
	}
	if err := Errorf("a b", 2, "%d wrong", 1); err.Error() != `"a b": 1 wrong` {
		t.Errorf("got %v", err)
	}
}
