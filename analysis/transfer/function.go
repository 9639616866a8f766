package transfer

// Function is a real transfer function in normalised zero–pole–gain form with an optional pure delay:
//
//	H(s) = Gain · s^(−Integrators) · Π(1 − s/z) / Π(1 − s/p) · e^(−s·Delay)
//
// Zeros and Poles are in rad/s, never at the origin (a root at the origin counts in Integrators: +1 for a
// pole, −1 for a zero); complex ones stand as conjugate pairs next to each other. Gain carries the sign.
// The form is what loops are evaluated in: about twenty complex multiplications a frequency, no coefficient
// that spans thirty decades.
type Function struct {
	Gain        float64
	Integrators int
	Zeros       []complex128
	Poles       []complex128
	Delay       float64
}

// Sampled is a discrete-time factor N(z)/D(z) at z = e^(sT): coefficients of z^0, z^−1, z^−2, …
type Sampled struct {
	Period      float64 // s
	Numerator   []float64
	Denominator []float64
}

// Product is what a loop is made of: a Function times an optional sampled factor (nil: none).
type Product struct {
	Function
	Sampled *Sampled
}
