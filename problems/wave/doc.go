// Package wave traces every wave of planar steady supersonic flow through an inlet
// of straight walls, at any Mach number and incidence: shocks swallowed by the lip,
// merging, crossing, reflecting in the duct, expanding at the shoulder.
//
// The method is front tracking (Dafermos, J. Math. Anal. Appl. 38, 1972; Holden &
// Risebro, Front Tracking for Hyperbolic Conservation Laws; both from memory). Such
// a flow is uniform but for shocks, slip lines and Prandtl-Meyer fans; a fan is cut
// into wavelets. Fronts between uniform regions are kept in order and swept
// downstream. Each event, the crossing of neighbours, a front at a wall, a corner,
// the lip where captured and spilled flow part, is a steady Riemann problem: the
// pressure and direction of the slip line that waves into both streams lead to.
// Events nearer than 1e-9 capture heights are one, so that a shock on the lip and a
// lip shock cancelled at the shoulder are what they were designed to be.
//
// What is exact and what is not:
//
//   - Shocks and slip lines conserve mass, momentum and energy to rounding; where
//     no fan and no merged front lies upstream, so are all numbers.
//   - A wavelet runs at the angle that closes mass and energy. Its momentum is open
//     by the third power of its turning, a fan's by the square of Wavelet; the sum
//     is Trace.OpenMomentum.
//   - Weak reflections and slip lines would multiply without bound. A slip line
//     below Threshold, and a reflection until those along one slip line add up to
//     more (account.go), is not sent out: the strong wave of the event carries its
//     jump along and the next event of that wave solves for the whole again. It also
//     runs at the angle that closes mass. Where that cannot be, nothing is merged. The
//     error falls in proportion to Threshold.
//
// With Wavelet halved and Threshold quartered at each step, the averages of a duct
// full of crossing waves converge at second order (2.1 measured).
//
// Every trace closes mass, momentum and energy over captured and spilled stream
// tubes and bounds its error by a coarser companion (Error).
//
// Where no regular supersonic solution exists, detached shock, Mach reflection,
// subsonic pocket, the trace ends with reason, place and state (Ending). Weak
// shocks are taken throughout; between the mechanical-equilibrium and the
// detachment criterion, where regular and Mach reflection are both possible, the
// regular one is followed.
//
// A design whose shocks all meet at the lip often ends a little above that Mach
// number, within a tenth of the capture height behind the lip, and that is physics:
// the layer of free stream between the merged shock and the cowl has lost most of its
// total pressure and must take the pressure behind the lip shock. A calculation by
// hand of the two shocks (layer_test.go) gives the layer's Mach number within 2 % of
// the trace: 0.99 for a Mach 6 article at 6.3, where the trace ends, 1.8 for a Mach
// 4.5 one, where it goes on. Within some hundredths of Mach 1 the resolution decides
// whether the layer is followed.
//
// The gas enters in state.go alone: the turning of a wave as a function of the
// pressure behind it, the states behind shocks and expansions, mass and momentum
// flux. A real gas is another such file.
package wave
