// Package uncertainty propagates the uncertainties of measured inputs to what is computed from them, by the law of
// propagation (JCGM 100:2008, GUM) and by random draws (JCGM 101:2008), and compares the two.
//
// A calculation is written once, in [Linear] numbers, which carry their partial derivatives by the inputs. With the
// derivatives switched off the same calculation serves the draws.
package uncertainty
