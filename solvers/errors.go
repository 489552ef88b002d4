package solvers

import "fmt"

// InputError says that a point cannot be solved as given: a negative
// thickness, a wavelength outside a material's range. Trying again gives the
// same.
type InputError struct {
	Where    string // material fused-silica, layer core
	Found    string
	Expected string
}

func (e *InputError) Error() string {
	return fmt.Sprintf("%s: found %s, expected %s", e.Where, e.Found, e.Expected)
}

// ConvergenceError says that a solver stopped short of its accuracy. Best
// holds the modes as far as they got.
type ConvergenceError struct {
	Where string
	Best  []Mode
	Err   error
}

func (e *ConvergenceError) Error() string {
	return fmt.Sprintf("%s: not converged: %v", e.Where, e.Err)
}

// Unwrap gives the cause.
func (e *ConvergenceError) Unwrap() error { return e.Err }

// ScopeError says that a section needs an equation that this program does
// not solve yet, and which.
type ScopeError struct {
	Section  string // circular, pipe, layers with strips
	Equation string // the equation it needs
}

func (e *ScopeError) Error() string {
	return fmt.Sprintf("section %s: it needs the %s equation, which is not solved yet", e.Section, e.Equation)
}
