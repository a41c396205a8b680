package inventory

import (
	"errors"
	"fmt"
)

// Reason classifies an Error for programs; people read its message.
type Reason int

// The reasons an operation on the drawer can fail for.
const (
	Invalid  Reason = iota + 1 // what was asked makes no sense: correct it
	NotFound                   // the lot, kit or file named does not exist
	Conflict                   // already done, or the drawer is in another state
	Shortage                   // the drawer does not hold enough available pieces
)

// Error is what every rule of the drawer fails with: a reason for programs and
// a sentence for people that says what was wrong and what to do.
type Error struct {
	Reason  Reason
	Message string
}

func (e *Error) Error() string { return e.Message }

// Errorf returns an *Error with the reason and the formatted message.
func Errorf(reason Reason, format string, args ...any) error {
	return &Error{Reason: reason, Message: fmt.Sprintf(format, args...)}
}

// ReasonOf returns the reason of the first *Error in err's chain, or 0.
func ReasonOf(err error) Reason {
	var e *Error
	if errors.As(err, &e) {
		return e.Reason
	}
	return 0
}
