// Package growth computes how undulations of a layered viscous column grow or decay:
// gravitational instability, folding, necking and thermal convection, alone or
// together, in linear theory.
//
// # The problem
//
// Depth z and displacement ξ are positive downward, SI throughout. Incompressible
// Stokes flow w = W(z) cos kx, u = U(z) sin kx with stresses σ_zz = Σ cos kx and
// σ_xz = S sin kx obeys
//
//	W' = −kU     U' = kW + S/η_S     Σ' = −kS − g δρ     S' = kΣ + 4 η_N k² U
//
// in every layer. η_S is the secant viscosity at the background, η_N the one that
// resists normal strain along the wavevector: η/n for power-law rock stretched that way
// (Fletcher 1974, Tectonophysics 22; Smith 1977, GSA Bull. 88). A contact displaced by
// ξ cos kx keeps W and U and jumps by
//
//	[Σ] = ξ [ρ] g     [S] = −4 k ξ d [η]     ([·] below minus above)
//
// with d = (e_k − e_z)/2 of the background strain. The flow has no time derivative, so
// the displacements alone evolve, dξ/dt = W + e_z ξ, that is dξ/dt = A(k) ξ. Growth
// rates are eigenvalues of A, interface shapes its eigenvectors; with a background or
// diffusing heat they can be complex.
//
// Fields inside layers join the states: the displacement ζ of a compositional gradient
// (δρ = −ρ_c ζ, dζ/dt = W + e_z ζ) and temperature perturbations (type Diffusion).
//
// # The method
//
// Each layer is cut into elements. Inside one, U' is collocated at eight Gauss points:
// a Gauss–Legendre Runge–Kutta method of order 16, which also is the variational method
// of least dissipation with the integrals done at those points, and hence keeps the
// reciprocity of Stokes flow exactly. Eliminating the inner unknowns (one 8 × 8 LDLᵀ)
// leaves the element's triple
//
//	v_b = Φ v_t + Ψ t_b     t_t = Φᵀ t_b − Q v_t     v = (W, U), t = (Σ, S)
//
// of small positive matrices that join without cancellation, for elements thin or thick
// against a wavelength: a stiffness form would lose (kh)⁻⁴. One sweep upwards gives the
// impedance Z of all that lies below each depth, t = −Z v (a half-space starts with
// 2k√(η_S η_N), exactly); one sweep downwards gives the compliance C of the whole
// column at each contact, and by reciprocity A. Everything in a triple but powers of kh
// is linear in the nodal viscosities, so a mesh serves a band of wavenumbers.
//
// The mesh rule bounds the change of ln η and of kh per element; what lies many
// wavelengths from every contact is replaced by two half-spaces. The error is estimated
// at the ends of each band by halving every element, which lowers it by 2¹⁶.
//
// Where nothing strains the column, A is similar to a symmetric matrix and only its
// largest eigenvalue is computed; elsewhere all are, by balanced QR.
//
// # What controls a mode
//
// Work done at the contacts equals dissipation. For d = 0 the dissipation share of a
// layer is −∂ln q/∂ln η of it. In general, derivatives follow from the left eigenvector
// and its own flow (file sensitivity.go). They hold viscosities, temperature and
// density jumps fixed but for the one that is varied.
//
// # Checked
//
// Package checks holds published and derived answers (two half-spaces, Turcotte &
// Schubert, Ramberg, Houseman & Molnar, Conrad & Molnar, Haskell, Fletcher, Biot,
// Smith, Chandrasekhar). The tests add two independent methods: exact layers in one
// dense system, and Taylor series in 50 digits and more.
//
// # Left out
//
// Elasticity, inertia, finite amplitude, a background simple shear, lateral variation,
// and the effect of a temperature perturbation on viscosity, which is of second order
// without a background and of first order with one (the term 4kd ∂η/∂T T').
package growth
