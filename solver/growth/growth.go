package growth

// Boundary is a mechanical boundary condition of the column's top or base.
type Boundary int

// The top is Free, FreeSlip or Rigid; the base HalfSpace, Inviscid, FreeSlip or Rigid.
const (
	Free Boundary = iota
	FreeSlip
	Rigid
	HalfSpace
	Inviscid
)

// Layer is one layer of constant or smoothly varying rock.
type Layer struct {
	Thickness float64 // m, > 0
	// Viscosity returns η_S and η_N in Pa s at depth z (m, in the column), both > 0.
	// It must be smooth inside the layer except at Kinks.
	Viscosity func(z float64) (etaS, etaN float64)
	Kinks     []float64 // depths in m, increasing, where the viscosity's slope jumps
	// Gradient returns the compositional density gradient ρ_c in kg/m⁴ at depth z;
	// nil where composition is uniform.
	Gradient func(z float64) float64
	// For Template. Breaks are depths in m, increasing, where the gradient's slope jumps.
	// Place says by a number, increasing with depth, which rock is at a depth, and Where at
	// which depth that rock is; nil: the share of the thickness that lies above. Rock beyond
	// the parts, come since, moves with the edge it came to.
	Breaks       []float64
	Place, Where func(float64) float64
	// HeatGradient says that Gradient is mostly that of temperature, carried without
	// diffusion: for the names of modes and the budget.
	HeatGradient bool
}

// Column is what the growth solver needs of a column, SI.
type Column struct {
	Gravity   float64 // m/s²
	Top, Base Boundary
	Layers    []Layer // from the surface down
	// Jumps are [ρ] below minus above in kg/m³: the surface first, then each contact,
	// last the base of the last layer (len(Layers)+1 values). The first counts only
	// under a Free top, the last only over HalfSpace and Inviscid.
	Jumps          []float64
	EtaS, EtaN     float64    // half-space viscosities, Pa s
	ShearRate      float64    // d of the background, 1/s: (e_k − e_z)/2
	VerticalStrain float64    // e_z of the background, 1/s
	Diffusion      *Diffusion // temperature perturbations as states; nil: none
}

// Rate is the leading growth rate at one wavelength.
type Rate struct {
	Wavelength    float64 // m
	Growth        float64 // largest real part over all modes, 1/s
	Imaginary     float64 // its imaginary part, 1/s, >= 0
	RelativeError float64 // estimated, of the complex rate
}

// Peak is a local maximum of growth against wavelength.
type Peak struct {
	Wavelength  float64 // m
	Growth      float64 // 1/s
	AtRangeEdge bool    // the largest value sits at an end of the range, so no maximum was bracketed
}

// Spectrum is growth against wavelength.
type Spectrum struct {
	Rates   []Rate // by increasing wavelength, or in the order asked for
	Peaks   []Peak // by decreasing growth; maxima inside the range
	Fastest Peak   // over the whole range
	Mode    *Mode  // at Fastest
	Shift   *Shift // of Fastest.Wavelength; nil at an end of the range and at a corner
}

// Shift is how the fastest wavelength λ moves: derivatives of ln λ with respect to each
// layer's ln viscosity, density (per kg/m³) and thickness (per m), the half-space last.
// Thickness is left out with diffusing temperature.
type Shift struct{ DlnEta, Drho, Dh []float64 }

// Mode is one eigenmode: shape, budget and sensitivities. Amplitudes are scaled so
// that the largest displacement of an interface or gradient is 1 m; of a complex mode
// the real part is given, at the phase where that displacement is largest.
type Mode struct {
	Wavelength, Growth, Imaginary float64
	Displacement                  []float64 // of each interface: surface, contacts, base; 0 where it cannot move
	Depth, W, U, Shear, Normal    []float64 // profile: z (m), vertical and horizontal velocity amplitude (m/s), S and Σ (Pa)
	Layer                         []int     // of each profile point
	StrainRate                    []float64 // of each layer, the largest second invariant, 1/s
	DissipationShare              []float64 // of each layer, the half-space last; sums to 1
	WorkShare                     []float64 // done by gravity at each interface, of the dissipation
	StrainShare                   []float64 // done by the background strain at each interface
	GradientWork                  []float64 // done by gravity on each layer's compositional gradient
	ThermalWork                   []float64 // done by gravity on each layer's temperature perturbation, the half-space last
	Residual                      float64   // relative gap between all that work and the dissipation
	DlnqDlnEta                    []float64 // ∂ln q/∂ln η of each layer, the half-space last; of the real part
	DqDrho                        []float64 // ∂q/∂ρ of each layer, the half-space last, 1/s per kg/m³
	DqDh                          []float64 // ∂q/∂h of each layer, its profile stretched and everything below moving down, 1/s per m

	shear, vertical float64 // d and e_z of the background
}
