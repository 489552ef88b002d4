// Package material gives what a material is to light: its relative
// permittivity (n - jk)^2 along x, y and z with exact derivatives in the
// angular frequency to third order, and in the parameters of a sweep.
//
// Words: the index n and extinction k of a material come from its source (a
// constant, a permittivity, a formula, a table or a named material). Shifts
// are then added to the index: add_index, and thermo_optic times the
// temperature above the reference temperature (DefaultReferenceTemperature
// where none is given; no shift where the sweep has no temperature). A
// permittivity eps (1 - j tan d) is shifted through its square root. The
// shifts of a material with axes are added to those of each of its axes.
//
// What it promises:
//   - Compile refuses what cannot be a material; Permittivity refuses a point
//     at which it is none: outside the range of wavelengths of its data, an
//     index that is not above zero, a metal. All refusals are
//     *solvers.InputError. Nothing is extrapolated.
//   - Derivatives are those of the formula, or of the fit to a table, without
//     differencing. A number that itself depends on the frequency counts with
//     its own derivatives.
//   - Permittivity allocates nothing once dst has its storage, and a Material
//     may serve any number of goroutines.
//
// Accuracy. Formulas are exact to rounding. A table is fitted by a spline of
// the seventh degree in the logarithm of the wavelength, as smooth as its
// rows allow; Residual tells how far it passes from them, and the doc
// comment of internal/smooth how the smoothness is found. Largest errors
// over the band, relative to the largest value there, of tables of fused
// silica over 0.4 to 2.4 um, evenly spaced in wavelength, as TestTableOfFormula logs
// them (the ends of the band are the worst):
//
//	table                          n        dn/dw    d2n/dw2  d3n/dw3
//	10 rows, as computed           4e-6     4e-4     3e-3     2e-2
//	41 rows, as computed           7e-9     3e-6     8e-6     2e-5
//	101 rows, as computed          7e-11    6e-8     3e-7     1e-5
//	1001 rows, as computed         2e-15    2e-10    8e-8     1e-5
//	101 rows, noise 1e-5           6e-6     2e-3     3e-3     2e-2
//	10000 rows, noise 1e-5         6e-7     4e-4     4e-3     2e-2
//	21 rows of four decimals       2e-5     2e-2     9e-2     2e-1
//	10000 rows of four decimals    1e-5     6e-3     3e-2     1e-1
//
// So a table of four decimals tells n and the group index; a dispersion or
// beta3 from it is a guess, whatever the fit.
//
// Named lists the built-in materials, each with its published source, range
// and temperature.
package material
