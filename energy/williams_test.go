package energy

import (
	"math"
	"testing"

	"strainledger/mesh"
)

// The modes in which a notch is loaded: I, II and III.
const (
	opened = iota
	sheared
	torn
)

// A vNotch is a sharp notch in an elastic body, its faces at ±γ from the bisector, with
// the eigenvalue λ of the leading term of each mode, stress ~ r^(λ-1).
type vNotch struct {
	gamma  float64
	lambda [torn + 1]float64
}

// notchOf returns the notch of an opening angle 2α in degrees; 0 is a crack.
func notchOf(opening float64) *vNotch {
	n := &vNotch{gamma: math.Pi * (1 - opening/360)}
	for mode := range n.lambda {
		n.lambda[mode] = n.eigenvalue(mode)
	}
	return n
}

// eigenvalue returns λ of a mode: the root of sin 2γλ ± λ sin 2γ = 0, which for mode II
// is above 1 from 2α = 102.55° on, and π/2γ for mode III.
//
// Source: Williams, Journal of Applied Mechanics 19 (1952) 526-528.
func (n *vNotch) eigenvalue(mode int) float64 {
	if mode == torn {
		return math.Pi / (2 * n.gamma)
	}
	sign, low, high := 1.0, 0.4, 0.9999
	if mode == sheared {
		sign = -1
		// λ = 1 is a root of no meaning; the other lies where the function comes from.
		if slope := 2*n.gamma*math.Cos(2*n.gamma) - math.Sin(2*n.gamma); slope < 0 {
			low, high = 2, 1.0001
		}
	}
	for range 200 { // the function is positive at low, negative at high
		middle := (low + high) / 2
		if math.Sin(2*n.gamma*middle)+sign*middle*math.Sin(2*n.gamma) > 0 {
			low = middle
		} else {
			high = middle
		}
	}
	return low
}

// stress returns the leading term of a mode at r, θ from the bisector, for a generalised
// stress intensity factor of 1: √(2π) r^(1-λ) times σ_θθ (mode I), τ_rθ (II) or τ_θz (III)
// is 1 on the bisector. Components are xx yy zz xy yz xz with x along r, y along θ; zz is
// that of plane strain, 0 in plane stress.
//
// It follows from the stress function r^(λ+1) F(θ), F = cos(λ-1)θ + c cos(λ+1)θ or with
// sines: σ_θθ = λ(λ+1) F, τ_rθ = -λ dF/dθ, σ_rr = d²F/dθ² + (λ+1) F.
func (n *vNotch) stress(mode int, r, theta, poissonsRatio float64, idealisation Idealisation) mesh.SymmetricTensor {
	l := n.lambda[mode]
	size := math.Pow(r, l-1) / math.Sqrt(2*math.Pi)
	if mode == torn {
		return mesh.SymmetricTensor{4: size * math.Cos(l*theta), 5: size * math.Sin(l*theta)}
	}
	var f, first, second, normalised float64
	a, b := l-1, l+1
	if mode == opened {
		c := -a * math.Sin(a*n.gamma) / (b * math.Sin(b*n.gamma)) // dF/dθ = 0 at γ
		f = math.Cos(a*theta) + c*math.Cos(b*theta)
		first = -a*math.Sin(a*theta) - c*b*math.Sin(b*theta)
		second = -a*a*math.Cos(a*theta) - c*b*b*math.Cos(b*theta)
		normalised = l * b * (1 + c) // σ_θθ at θ = 0
	} else {
		c := -math.Sin(a*n.gamma) / math.Sin(b*n.gamma) // F = 0 at γ
		f = math.Sin(a*theta) + c*math.Sin(b*theta)
		first = a*math.Cos(a*theta) + c*b*math.Cos(b*theta)
		second = -a*a*math.Sin(a*theta) - c*b*b*math.Sin(b*theta)
		normalised = -l * (a + c*b) // τ_rθ at θ = 0
	}
	size /= normalised
	stress := mesh.SymmetricTensor{size * (second + b*f), size * l * b * f, 0, -size * l * first}
	if idealisation != PlaneStress {
		stress[2] = poissonsRatio * (stress[0] + stress[1])
	}
	return stress
}

// coefficient returns e of a mode: the mean density over the sector of radius R is
// e K² R^(2λ-2) / E. With W ~ r^(2λ-2), the mean is that on the arc r = R over λ, taken
// here by Simpson's rule over θ with the densities of package energy.
func (n *vNotch) coefficient(t testing.TB, mode int, poissonsRatio float64, idealisation Idealisation) float64 {
	t.Helper()
	law := isotropic(t, 1, poissonsRatio)
	density := func(theta float64) float64 {
		stress := n.stress(mode, 1, theta, poissonsRatio, idealisation)
		strain := law.Strain(&stress)
		return Density(&stress, &strain)
	}
	// The integrand is smooth: 600 steps are exact to 1e-10.
	const steps = 600
	width := 2 * n.gamma / steps
	sum := density(-n.gamma) + density(n.gamma)
	for i := 1; i < steps; i++ {
		sum += float64(2+2*(i%2)) * density(-n.gamma+float64(i)*width)
	}
	return sum * width / 3 / (2 * n.gamma) / n.lambda[mode]
}

// The fields are in equilibrium, and the faces are free: what makes them Williams' fields
// whatever formula they come from.
func TestWilliamsFields(t *testing.T) {
	const step = 1e-4
	for _, opening := range []float64{0, 45, 90, 110, 135, 150} {
		n := notchOf(opening)
		for _, mode := range []int{opened, sheared, torn} {
			at := func(r, theta float64) mesh.SymmetricTensor { return n.stress(mode, r, theta, 0.3, PlaneStrain) }
			for _, face := range []float64{n.gamma, -n.gamma} {
				if s := at(0.7, face); math.Abs(s[1]) > 1e-9 || math.Abs(s[3]) > 1e-9 || math.Abs(s[4]) > 1e-9 {
					t.Errorf("%g°, mode %d: the face carries %v", opening, mode, s)
				}
			}
			for _, theta := range []float64{-1.3, 0, 0.4, 1.5} {
				const r = 0.7
				s := at(r, theta)
				var byR, byTheta mesh.SymmetricTensor
				for i := range s {
					byR[i] = (at(r+step, theta)[i] - at(r-step, theta)[i]) / (2 * step)
					byTheta[i] = (at(r, theta+step)[i] - at(r, theta-step)[i]) / (2 * step)
				}
				for _, residual := range []float64{
					byR[0] + byTheta[3]/r + (s[0]-s[1])/r, byR[3] + byTheta[1]/r + 2*s[3]/r, byR[5] + byTheta[4]/r + s[5]/r,
				} {
					if math.Abs(residual) > 1e-6 {
						t.Errorf("%g°, mode %d, θ %g: div σ has the component %g", opening, mode, theta, residual)
					}
				}
			}
			on := at(1, 0)
			if got := math.Sqrt(2*math.Pi) * on[map[int]int{opened: 1, sheared: 3, torn: 4}[mode]]; !within(got, 1, 1e-12) {
				t.Errorf("%g°, mode %d: K %g, want 1", opening, mode, got)
			}
		}
	}
}

// N-01, N-01b (Williams 1952, the equation): eigenvalues.
func TestWilliamsEigenvalues(t *testing.T) {
	for opening, want := range map[float64]float64{
		0: 0.5, 15: 0.50017927, 30: 0.50145301, 45: 0.50500970, 60: 0.51222136, 90: 0.54448374, 120: 0.61573106, 135: 0.67358343, 150: 0.75197455,
	} {
		if got := notchOf(opening).lambda[opened]; math.Abs(got-want) > 1e-8 {
			t.Errorf("N-01: mode I at %g°: %.9f, want %.8f", opening, got, want)
		}
	}
	for opening, want := range map[float64]float64{0: 0.5, 30: 0.59819185, 60: 0.73090074, 90: 0.90852919, 100: 0.98047493} {
		if got := notchOf(opening).lambda[sheared]; math.Abs(got-want) > 1e-8 {
			t.Errorf("N-01b: mode II at %g°: %.9f, want %.8f", opening, got, want)
		}
	}
}
