// Package jet is a truncated Taylor arithmetic: the value of a quantity with
// its first three derivatives in the angular frequency w and its first
// derivatives in the base parameters p, d/dp and d2/dwdp.
package jet

// Jet holds derivatives, not Taylor coefficients. P and WP have one entry a
// base parameter; both may be nil, which means zero.
type Jet struct {
	V, W, WW, WWW complex128   // value, d/dw, d2/dw2, d3/dw3
	P, WP         []complex128 // d/dp, d2/dwdp
}
