package twin

import "math"

// brent finds a root of f between a and b, where f has the values fa and fb of
// opposite sign (or 0), to an accuracy of tolerance (Brent 1973, chapter 4:
// inverse quadratic interpolation guarded by bisection). An error of f ends the
// search.
func brent(f func(float64) (float64, error), a, fa, b, fb, tolerance float64) (float64, error) {
	if fa*fb > 0 {
		panic("twin: root is not bracketed")
	}
	// b is the best point so far, a the one before, c keeps the root enclosed.
	c, fc := a, fa
	step := b - a
	before := step
	for {
		if (fb > 0) == (fc > 0) {
			c, fc = a, fa
			step = b - a
			before = step
		}
		if math.Abs(fc) < math.Abs(fb) {
			a, b, c = b, c, b
			fa, fb, fc = fb, fc, fb
		}
		least := 2*0x1p-52*math.Abs(b) + tolerance/2
		half := (c - b) / 2
		if math.Abs(half) <= least || fb == 0 {
			return b, nil
		}
		if math.Abs(before) < least || math.Abs(fa) <= math.Abs(fb) {
			step, before = half, half
		} else {
			var p, q float64
			s := fb / fa
			if a == c {
				p, q = 2*half*s, 1-s
			} else {
				u, r := fa/fc, fb/fc
				p = s * (2*half*u*(u-r) - (b-a)*(r-1))
				q = (u - 1) * (r - 1) * (s - 1)
			}
			if p > 0 {
				q = -q
			} else {
				p = -p
			}
			if 2*p < min(3*half*q-math.Abs(least*q), math.Abs(before*q)) {
				before, step = step, p/q
			} else {
				step, before = half, half
			}
		}
		a, fa = b, fb
		if math.Abs(step) > least {
			b += step
		} else {
			b += math.Copysign(least, half)
		}
		var err error
		if fb, err = f(b); err != nil {
			return b, err
		}
	}
}
