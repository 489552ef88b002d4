package material

import (
	"fmt"

	"betaloom/solvers"
)

// fault is what is wrong with a material, before it is known where it stands.
type fault struct{ found, expected string }

// found says that a number is not what it must be.
func found(what string, v float64, expected string) *fault {
	return &fault{fmt.Sprintf("%s %g", what, v), expected}
}

// at is the fault as the error of a material.
func (f *fault) at(where string) error {
	return &solvers.InputError{Where: where, Found: f.found, Expected: f.expected}
}
