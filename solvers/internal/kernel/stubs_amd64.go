package kernel

//go:noescape
func sub512(c *float64, ldc int, a *float64, ars, acs int, b *float64, ldb, m, n, k int)

//go:noescape
func sub512row(c, a *float64, acs int, b *float64, ldb, n, k int)

//go:noescape
func sub512complex(c *complex128, ldc int, a *complex128, ars, acs int, b *complex128, ldb, m, n, k int)

//go:noescape
func solve512(l *float64, row int, x *float64, ldx, m, n int)

//go:noescape
func solve512complex(l *complex128, row int, x *complex128, ldx, m, n int)

//go:noescape
func dots512(y, a *float64, row int, x *float64, m, k int)

//go:noescape
func dot512complex(x, y *complex128, n int) (rr, ii, ri, ir float64)

//go:noescape
func peak512(x *float64, n int) float64

//go:noescape
func peak512complex(x *complex128, n int) float64

//go:noescape
func turn512(dst *float64, dr int, src *float64, sr int, scale *float64, m, n int)

//go:noescape
func turn512complex(dst *complex128, dr int, src *complex128, sr int, scale *complex128, m, n int)

//go:noescape
func pivots512(w, l *float64, row, n, t, end int, alpha float64) int

//go:noescape
func sub256(c *float64, ldc int, a *float64, ars, acs int, b *float64, ldb, m, n, k int)

//go:noescape
func sub256complex(c *complex128, ldc int, a *complex128, ars, acs int, b *complex128, ldb, m, n, k int)

//go:noescape
func dots256(y, a *float64, row int, x *float64, m, k int)

//go:noescape
func dot256complex(x, y *complex128, n int) (rr, ii, ri, ir float64)
