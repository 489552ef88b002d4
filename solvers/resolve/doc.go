// Package resolve turns a sweep's physics and the parameter values of a point into
// the numbers that a solver needs: every dimension and every permittivity as
// a jet, its value with the exact derivatives in the angular frequency and
// in the base parameters.
//
// A derived parameter is evaluated through its expression, so that all
// derivatives in the base parameters are total.
//
// Frequency plays two parts. A material whose numbers depend on wavelength
// or frequency through an expression disperses, and its jets carry those
// derivatives (Number, Medium). A guide keeps its shape whatever light it carries: a
// dimension that follows the wavelength by design is held fixed in
// derivatives with respect to frequency (Dimension).
//
// Where wavelength or frequency is itself derived from base parameters, the
// jets of media are taken at fixed frequency, and Sweep says how fast the
// frequency moves with each base parameter, for the caller to add.
package resolve
