package excision

import (
	"math"

	"keelfall/column"
	"keelfall/rheology"
	"keelfall/solver/heat"
)

// Drive says what sets a zone's slip rate.
type Drive int

// A zone has one of these.
const (
	GivenRate      Drive = iota // SlipRate
	ExtensionShare              // Share of the arc's extension: share × rate × present width = s cos θ
	PressureStep                // PressureGap is reached at the end of its interval, at a constant rate
	ForceBalance                // the force FarField + ΔΓ is carried by the zone: F(s) = F
)

// Zone is one shear zone.
type Zone struct {
	Name        string
	Dip         float64  // rad, 0 < dip <= π/2
	LayeringDip float64  // rad, towards the zone's dip direction
	Cuts        []string // names of the layers it cuts out, from above downwards; the last, lowest one is cut first
	From, To    float64  // s, active interval; To is +Inf for a zone without an end
	Drive       Drive    // which of the next four holds
	SlipRate    float64  // m/s, >= 0
	Share       float64  // of the arc's extension, 0 to 1
	PressureGap float64  // Pa, missing across the zone at To
	FarField    float64  // N/m, without what the column's own weight adds; positive in tension
	Width       float64  // m, normal to the zone; 0 where not given; ForceBalance needs it

	// The zone's own rock, for ForceBalance. Without Creep it creeps as the layer at each
	// depth does; without Friction it has that layer's, and where there is none never yields.
	Creep          *rheology.Creep
	GrainSize      float64 // m; 0: the layer's
	Water          float64 // Pa or H/10⁶ Si, as WaterMeasure says; with NoWater the layer's
	WaterMeasure   rheology.WaterMeasure
	Friction       *rheology.Friction
	StrengthFactor float64 // multiplies creep and friction of the zone; 0 means 1
}

// Plan is a column through time with its zones.
type Plan struct {
	Heat      heat.Plan // Column, events and the arc's extension rate; a column without a temperature is taken too
	Zones     []Zone
	ArcWidth  float64 // m, original; 0 where not given; ExtensionShare and ForceBalance need it
	Reference float64 // 1/s, at which viscosities given as a number with an exponent hold

	// Weight returns ΔΓ, the force in N/m by which the column, as Snapshot gives it, spreads
	// against the reference column; nil: 0. The force on ForceBalance zones is FarField + ΔΓ.
	Weight func(*column.Column, *heat.Profile) (float64, error)
}

// ZoneHistory is one zone against time; lists have one value for each of History.Time.
type ZoneHistory struct {
	Name                  string
	Slip, Heave, Throw    []float64 // m
	OmissionStratigraphic []float64 // m, across the layering; negative: repeated
	OmissionVertical      []float64 // m; negative: repeated
	PressureGap           []float64 // Pa missing across the zone
	Rate                  []float64 // m/s, slip rate now
	Remaining             []float64 // m, of the layers it cuts, in the column
	Strips                []Strip   // one for each of Cuts

	// Of ForceBalance, else nil; 0 outside the zone's interval.
	Force    []float64 // N/m, driving: FarField + ΔΓ
	Strength []float64 // N/m, what the zone bears at StandardSlip
	Stress   []float64 // Pa, shear stress on the zone where it crosses the column
	Heating  []float64 // W/m² of map area, shear heat there
	T        []float64 // K, there

	UsedUp  float64 // s when its layers were used up in this column; +Inf where not
	Runaway float64 // s when it slipped faster than FastestSlip and was held there; +Inf where not
	Holds   float64 // s when it was first found not to slip at all; +Inf where not
}

// Strip is the strip of an arc over which one layer is wholly gone.
type Strip struct {
	Layer string
	Width []float64 // m, heave − h/tan θ where above 0, h the layer's thickness without the zone
}

// LayerHistory is one layer that zones cut, against time.
type LayerHistory struct {
	Name      string
	Root      bool
	Thickness []float64 // m, in the column the zones cross
	ArcMean   []float64 // m, averaged over the arc; nil without a width
}

// Slip rates of force-balanced zones, m/s.
const (
	StandardSlip = 1e-3 / (365.25 * 86400) // 1 mm/yr, at which strengths are given
	FastestSlip  = 1.0 / (365.25 * 86400)  // 1 m/yr: a zone that wants to slip faster runs away
	SlowestSlip  = 1e-16                   // slower, 3 m in 1000 Myr, is no slip: creep has no strength below which nothing moves
)

// level is a sine or cosine below which an angle counts as zero: round-off of a dip
// of 90° or of layering parallel to the zone.
const level = 1e-12

// VerticalLoss is the vertical thickness lost per slip, sin(θ − δ)/cos δ.
func (z *Zone) VerticalLoss() float64 { return z.StratigraphicLoss() / math.Cos(z.LayeringDip) }

// StratigraphicLoss is the thickness lost per slip across the layering, sin(θ − δ);
// 0 where zone and layering are parallel.
func (z *Zone) StratigraphicLoss() float64 { return clean(math.Sin(z.Dip - z.LayeringDip)) }

// Heave is the horizontal extension per slip, cos θ; 0 for a vertical zone.
func (z *Zone) Heave() float64 { return clean(math.Cos(z.Dip)) }

// Throw is the vertical offset per slip, sin θ.
func (z *Zone) Throw() float64 { return math.Sin(z.Dip) }

func clean(x float64) float64 {
	if math.Abs(x) < level {
		return 0
	}
	return x
}

// StrainRate is the zone's second invariant s/(2b), 1/s; 0 where its width is unknown.
func (z *Zone) StrainRate() float64 {
	if z.Width == 0 {
		return 0
	}
	return z.SlipRate / (2 * z.Width)
}
