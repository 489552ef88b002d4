// Package slab solves planar guides: any number of layers, each with its own
// permittivity along x (in the plane, across), y (the normal) and z (along the guide),
// lossy or amplifying ones and optical metals too, between half-spaces or metal planes.
//
// Words: a stack is layers from the bottom up. A film is a layer with a
// thickness; a ground is a perfectly conducting plane. N = neff^2 = L/k^2. A line
// is the equation of one polarisation on a stack; psi is Ex for TE and Hx for TM, phi its
// flux. "Along the way" means as frequency changes with everything that depends on it. A
// shape is kept over frequency: a thickness counts with its value and its
// gradient in the parameters only.
//
// # Equation
//
// With lengths in units of 1/k, on every layer
//
//	psi' = phi/p,  phi' = -b (e - N) psi      psi, phi continuous
//	TE: p = 1,         b = 1,         e = eps_x;  psi = 0 on a ground
//	TM: p = 1/eps_z,   b = 1/eps_y,   e = eps_y;  phi = 0 on a ground
//
// and decay with g^2 = (b/p)(N - e), Re g > 0, in half-spaces (Yeh, Optical Waves in
// Layered Media). The mismatch of the waves carried from both ends to one interface vanishes at a mode.
// Derivatives in frequency come from the mismatch in truncated Taylor arithmetic, D(u(t), t) = 0
// order by order, and those in parameters from the variational formula, dL/dp = -x'F_p x / x'Bx, along the way:
// no differences are taken anywhere.
//
// # Assumptions
//
// Without loss and with positive permittivities the equation is a Sturm-Liouville
// problem: its modes are numbered by the nodes of psi, counted exactly and bracketed one by one (proof "node
// count"). TE0 and TM0 have no node, between two grounds too. With loss or gain the modes of the
// real parts are followed as the imaginary parts grow, and the argument principle on a region
// that holds every guided mode says whether these are all; where it says otherwise, and for TM with
// negative permittivities, it finds them. Labels TE m and TM m then continue those
// of the lossless guide; modes that continue none take the lowest numbers left and
// those of a TM problem with negative real parts are numbered, from the highest Re neff down.
//
// Guided: Re neff above the index of both half-spaces and Re N > 0. A stack that is its own mirror
// image is split exactly: Symmetry is that of Ex (TE) or Hx (TM), and two equal films far
// apart have two modes each with half the power in either film. Two modes that agree in every digit
// without such a mirror plane are each given their own film; where their group indices differ NgErr
// says by how much, GVDErr and Beta3Err are NaN (there is no bound) and the flag is avoided-crossing.
//
// # Unknown
//
// N is sought as base + sigma u^2 with u the decay in the half-space of the higher
// index, so that a mode just above cut-off keeps its digits in every column. Where there is no such half-space u is N.
//
// What the columns mean: Neff, Kappa, Ng, GVD and Beta3 are real parts of exact
// derivatives. Confinement (one number a layer of the stack, negative in a metal, where power flows
// back) and Weff = (int S)^2 / int S^2 are of S = Re(1 or neff/eps_y) |psi|^2. Z is the wave impedance omega mu/beta of TE; of TM only
// in one uniform medium. Cutoff is set between two grounds with one
// lossless fill without dispersion. The flag near-cutoff says that neff is less than 1e-5 above
// the cut-off index. Signature is psi at sixteen places spread evenly over the films and a quarter of their
// extent beyond each open face, with unit norm and psi positive at the lowest end (where it has no node); a lossy
// mode is first turned in phase until the sum of psi^2 is real.
//
// # Accuracy
//
// Only rounding. Counts hold where both parts of every region split on the way add up to the whole, and
// are taken again in smaller steps where they do not. Measured against characteristic equations solved with 420 bits, the largest error over
// the tests' stacks (neff and sensitivities relative, GVD relative to max(|value|, 1 ps^2/km), beta3 likewise):
//
//	stacks                            neff     ng       GVD      beta3    error/bound
//	23 layered, 149 random lossless   3e-15    3e-15    7e-13    1e-12    0.23
//	neff 1e-6 above cut-off           1e-16    5e-15    2e-14    4e-13    0.02
//	neff 1e-9 above cut-off           1e-16    4e-15    6e-12    1e-11    0.12
//
// The bounds follow the rounding of every layer and face through the Taylor coefficients, and that of the stack's own
// numbers: 4 x 2^-53 of each permittivity and derivative, 2^-53 of each thickness. Between two grounds a mode near
// cut-off is as badly conditioned as its closed form, and its bound says so. Two modes of a three-layer
// slab with every column take about 5 us of one core, ten times that with loss; nothing is allocated once the work space has grown.
//
// # When it fails
//
// An *solvers.InputError names the layer: a thickness that is negative, not a number or of more than 1e9
// radians, a permittivity of zero, a half-space in the wrong place. A *solvers.ConvergenceError says that the modes could not be proven
// complete: TM with a hyperbolic layer (eps_y and eps_z of opposite sign: there is no highest mode) or with
// two media whose permittivities add up to nothing; a half-space that is lossy and so anisotropic that
// radiated and guided waves run into each other; two lossy guides in one stack without mirror plane whose modes agree to 1e-8
// but not in every digit. Chains of three or more equal films so far apart that their modes agree in every digit
// give each mode one film (or one mirrored pair) rather than the chain's standing waves.
package slab
