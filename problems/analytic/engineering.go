package analytic

import "math"

// engineering are the classic sizing problems of machine design, with every
// variable continuous.
var engineering = []Function{
	{
		Name: "welded_beam",
		Definition: "lowest cost of a welded cantilever: weld height x1 and length x2, beam height x3 and width x4, in; " +
			"g1 shear and g2 bending stress, psi, g3 x1 - x4, g4 cost without weld labour less 5, g5 0.125 - x1, g6 deflection, in, g7 load less buckling load, lbf",
		Source:    "Ragsdell & Phillips, J. Eng. Ind. 98 (1976), in the form of Coello Coello (2000) (from memory)",
		Variables: box([2]float64{0.1, 2}, [2]float64{0.1, 10}, [2]float64{0.1, 10}, [2]float64{0.1, 2}),
		Limits: []Range{
			{math.Inf(-1), 13600}, {math.Inf(-1), 30000}, {math.Inf(-1), 0}, {math.Inf(-1), 0},
			{math.Inf(-1), 0}, {math.Inf(-1), 0.25}, {math.Inf(-1), 0},
		},
		Best:     []float64{0.20572963979, 3.47048866563, 9.03662391036, 0.20572963979},
		Lowest:   1.72485230859,
		evaluate: weldedBeam,
	},
	{
		Name: "pressure_vessel",
		Definition: "lowest cost of a cylindrical vessel with hemispherical heads: shell x1 and head x2 thickness, radius x3, length x4, in; " +
			"g1 0.0193 x3 - x1, g2 0.00954 x3 - x2, g3 1296000 in3 less volume, g4 x4 - 240",
		Source:    "Kannan & Kramer, J. Mech. Design 116 (1994), continuous (from memory)",
		Variables: box([2]float64{0.0625, 6.1875}, [2]float64{0.0625, 6.1875}, [2]float64{10, 200}, [2]float64{10, 200}),
		Limits:    below(4),
		Best:      []float64{0.778168641375, 0.384649162628, 40.319618724, 200},
		Lowest:    5885.33277362,
		evaluate:  pressureVessel,
	},
	{
		Name: "tension_spring",
		Definition: "lowest weight of a coil spring: wire x1 and coil x2 diameter, in, active coils x3; " +
			"g1 deflection, g2 shear stress, g3 surge frequency, g4 outer diameter, each scaled to g <= 0",
		Source:    "Belegundu (1982); Arora, Introduction to Optimum Design (1989) (from memory)",
		Variables: box([2]float64{0.05, 2}, [2]float64{0.25, 1.3}, [2]float64{2, 15}),
		Limits:    below(4),
		Best:      []float64{0.0516890610, 0.3567177356, 11.288966},
		Lowest:    0.01266523278,
		evaluate:  tensionSpring,
	},
	{
		Name: "speed_reducer",
		Definition: "lowest weight of a gear box: face width x1 and module x2, cm, teeth x3, shaft lengths x4, x5 and diameters x6, x7, cm; " +
			"g1 bending and g2 contact stress, g3, g4 deflections, g5, g6 shaft stresses, g7..g11 proportions, each scaled to g <= 0",
		Source: "Golinski, J. Mechanisms 5 (1970); box of shaft lengths 7.3..8.3 (from memory)",
		Variables: box([2]float64{2.6, 3.6}, [2]float64{0.7, 0.8}, [2]float64{17, 28}, [2]float64{7.3, 8.3},
			[2]float64{7.3, 8.3}, [2]float64{2.9, 3.9}, [2]float64{5, 5.5}),
		Limits:   below(11),
		Best:     []float64{3.5, 0.7, 17, 7.3, 7.71531991147825, 3.35021466609645, 5.28665446498022},
		Lowest:   2994.47106614682,
		evaluate: speedReducer,
	},
}

// weldedBeam has load P 6000 lbf at L 14 in, E 30e6 and G 12e6 psi:
//
//	value = 1.10471 x1^2 x2 + 0.04811 x3 x4 (14 + x2)
//	tau = sqrt(t1^2 + t1 t2 x2/R + t2^2), t1 = P/(sqrt2 x1 x2), t2 = P (L + x2/2) R/J
//	R^2 = x2^2/4 + ((x1 + x3)/2)^2, J = 2 sqrt2 x1 x2 (x2^2/12 + ((x1 + x3)/2)^2)
//	sigma = 6 P L/(x4 x3^2), deflection = 4 P L^3/(E x3^3 x4)
//	buckling = 4.013 E sqrt(x3^2 x4^6/36)/L^2 (1 - x3/(2 L) sqrt(E/(4 G)))
func weldedBeam(x, dst []float64) {
	const load, length, young, shear = 6000, 14, 30e6, 12e6
	h, l, t, b := x[0], x[1], x[2], x[3]
	half := square((h + t) / 2)
	radius := math.Sqrt(l*l/4 + half)
	polar := 2 * math.Sqrt2 * h * l * (l*l/12 + half)
	direct := load / (math.Sqrt2 * h * l)
	twist := load * (length + l/2) * radius / polar
	bar := 0.04811 * t * b * (14 + l)
	dst[0] = 1.10471*h*h*l + bar
	dst[1] = math.Sqrt(direct*direct + direct*twist*l/radius + twist*twist)
	dst[2] = 6 * load * length / (b * t * t)
	dst[3] = h - b
	dst[4] = 0.10471*h*h + bar - 5
	dst[5] = 0.125 - h
	dst[6] = 4 * load * cube(length) / (young * cube(t) * b)
	dst[7] = load - 4.013*young*t*cube(b)/6/square(length)*(1-t/(2*length)*math.Sqrt(young/(4*shear)))
}

// pressureVessel is
//
//	0.6224 x1 x3 x4 + 1.7781 x2 x3^2 + 3.1661 x1^2 x4 + 19.84 x1^2 x3
//
// with volume pi x3^2 x4 + 4/3 pi x3^3.
func pressureVessel(x, dst []float64) {
	shell, head, r, l := x[0], x[1], x[2], x[3]
	dst[0] = 0.6224*shell*r*l + 1.7781*head*r*r + 3.1661*shell*shell*l + 19.84*shell*shell*r
	dst[1] = 0.0193*r - shell
	dst[2] = 0.00954*r - head
	dst[3] = 1296000 - math.Pi*r*r*l - 4./3*math.Pi*cube(r)
	dst[4] = l - 240
}

// tensionSpring is (x3 + 2) x2 x1^2. Where coil and wire diameter are equal the
// stress has no value.
func tensionSpring(x, dst []float64) {
	d, coil, n := x[0], x[1], x[2]
	dst[0] = (n + 2) * coil * d * d
	dst[1] = 1 - cube(coil)*n/(71785*fourth(d))
	dst[2] = (4*coil*coil-d*coil)/(12566*(coil*cube(d)-fourth(d))) + 1/(5108*d*d) - 1
	dst[3] = 1 - 140.45*d/(coil*coil*n)
	dst[4] = (d+coil)/1.5 - 1
}

// speedReducer is
//
//	0.7854 x1 x2^2 (3.3333 x3^2 + 14.9334 x3 - 43.0934) - 1.508 x1 (x6^2 + x7^2)
//	+ 7.4777 (x6^3 + x7^3) + 0.7854 (x4 x6^2 + x5 x7^2)
func speedReducer(x, dst []float64) {
	x1, x2, x3, x4, x5, x6, x7 := x[0], x[1], x[2], x[3], x[4], x[5], x[6]
	dst[0] = 0.7854*x1*x2*x2*(3.3333*x3*x3+14.9334*x3-43.0934) - 1.508*x1*(x6*x6+x7*x7) +
		7.4777*(cube(x6)+cube(x7)) + 0.7854*(x4*x6*x6+x5*x7*x7)
	dst[1] = 27/(x1*x2*x2*x3) - 1
	dst[2] = 397.5/(x1*x2*x2*x3*x3) - 1
	dst[3] = 1.93*cube(x4)/(x2*x3*fourth(x6)) - 1
	dst[4] = 1.93*cube(x5)/(x2*x3*fourth(x7)) - 1
	dst[5] = math.Sqrt(square(745*x4/(x2*x3))+16.9e6)/(110*cube(x6)) - 1
	dst[6] = math.Sqrt(square(745*x5/(x2*x3))+157.5e6)/(85*cube(x7)) - 1
	dst[7] = x2*x3/40 - 1
	dst[8] = 5*x2/x1 - 1
	dst[9] = x1/(12*x2) - 1
	dst[10] = (1.5*x6+1.9)/x4 - 1
	dst[11] = (1.1*x7+1.9)/x5 - 1
}
