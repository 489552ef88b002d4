// Package quantity reads and writes numbers with units.
//
// Words: a quantity is a number with a unit ("1.55 um"); a unit is a name
// ("um") or a product of names and whole powers ("S/m", "um^2", "1/K"); a
// dimension (schema.Dimension) is what two quantities must share to be added.
// A number without a unit is a pure number. An angle is not a pure number.
//
// Inside the program every value is in SI units with angles in radians, and
// every temperature in kelvin. "degC" names an absolute temperature and has
// an offset, so it stands alone: it has no powers and no place in a compound
// unit.
//
// The package promises that Parse gives the float64 nearest to the quantity
// as written ("1.55 um" is the same float64 as 1.55e-6), that Format gives
// text which parses back to the same value, and that no text, however long
// or odd, panics, hangs or gives NaN or an infinity. What cannot be read is
// an *Error with what was found and what was expected.
package quantity
