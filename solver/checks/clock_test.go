package checks

import (
	"math"
	"testing"
)

// TestDodsonA works the closed form out: the mean concentration of a grain loses its
// modes as c exp(−α² ∫D dt/a²), and ln A = γ + Σ c ln α². Sphere: α = nπ, c = 6/α².
// Cylinder: zeros of J₀, c = 4/α². Sheet: α = (n − 1/2)π, c = 2/α². The tail of the sum
// is an integral. Source: derived.
func TestDodsonA(t *testing.T) {
	const modes = 200000
	for i, g := range []struct {
		c     float64
		shift float64
	}{{6, 0}, {4, -0.25}, {2, -0.5}} {
		sum := 0.57721566490153286 // Euler's γ
		for n := 1; n <= modes; n++ {
			alpha := (float64(n) + g.shift) * math.Pi
			if i == 1 {
				for range 6 { // Newton; J₀' = −J₁
					alpha += math.J0(alpha) / math.J1(alpha)
				}
			}
			sum += g.c / (alpha * alpha) * 2 * math.Log(alpha)
		}
		end := (modes + 0.5 + g.shift) * math.Pi
		sum += 2 * g.c / math.Pi * (math.Log(end) + 1) / end
		if math.Abs(sum-dodson[i].lnA) > 1e-9 {
			t.Errorf("%s: ln A = %.12f, A = %.9f, not %.12f", dodson[i].name, sum, math.Exp(sum), dodson[i].lnA)
		}
	}
}
