// Package blend computes thermodynamic states of refrigerant blends with the multi-fluid Helmholtz model, and their phase
// equilibrium.
//
// The model is that of Lemmon and Jacobsen, J. Phys. Chem. Ref. Data 33 (2004) 593, doi:10.1063/1.1649997, and of Kunz and
// Wagner, J. Chem. Eng. Data 57 (2012) 3032, doi:10.1021/je300655b: the residual parts of the pure equations at a common
// tau and delta, weighted with the mole fractions, plus a departure function for some pairs. The reducing functions of both
// papers may stand side by side in one blend. What is known of each pair, and how well, comes with [Blend.Pairs] and
// [Blend.Cautions].
//
// Equilibrium means equal fugacities of all components, equal temperature and equal pressure. Phases are described by
// temperature and concentrations, so that no density has to be solved for inside: points of the phase envelope by an
// [edge], states of two phases by a [split], both found by Newton's method with exact derivatives. The envelope of a blend
// is followed once, from the cold end of the bubble line over the critical point to the cold end of the dew line; below
// the critical region both lines are then expanded in Chebyshev polynomials, which start the solvers and answer most
// questions about bubble and dew points.
//
// Units are SI and per mass: K, Pa (absolute), kg/m3, J/kg, J/(kg K), m/s. Inside, quantities are per mole. Compositions
// are mass fractions in the order of [Blend.Components].
//
//	library, err := blend.NewLibrary(records)
//	r454b, err := library.Blend("R454B", blend.DefaultDatum)
//	suction, err := r454b.TemperaturePressure(283.15, 800e3)
//
// All values are immutable once made and safe for concurrent use. Errors are typed: [RangeError], [AmbiguousError],
// [NoSolutionError], [ConvergenceError], [ConditionError], [DependentPairError], [DatumError], [CompositionError],
// [UnverifiedPairError], [UnknownBlendError], [EnvelopeError].
package blend
