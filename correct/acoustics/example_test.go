package acoustics_test

import (
	"fmt"
	"math"

	"bentray/correct/acoustics"
	"bentray/correct/medium"
)

func ExampleCast_Profile() {
	cast := acoustics.Cast{
		DepthM:       []float64{0.5, 2, 4, 3.8, 6, 8, 7, 5, 3, 1}, // down with the swell, then up again
		TemperatureC: []float64{19, 18.5, 17, 17.1, 14, 12, 12.5, 15, 17.5, 18.8},
		Salinity:     []float64{31, 31, 31.5, 31.5, 32, 32, 32, 31.5, 31, 31},
	}
	p, told, err := cast.Profile(medium.ChenMillero, 54*math.Pi/180, acoustics.Linear)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%d of %d rows, to %g m\n", told.Kept, told.Rows, p.LastM())
	// Output: 5 of 10 rows, to 8 m
}

// Straight down through a constant gradient: z = c (exp(g t) - 1) / g.
func ExampleProfile_Trace() {
	p, err := acoustics.NewProfile([]float64{0, 6000}, []float64{1500, 1596}, acoustics.Linear)
	if err != nil {
		fmt.Println(err)
		return
	}
	a := p.Trace(0, 0, 1, 1)
	fmt.Printf("%.3f m, want %.3f\n", a.DepthM, 1500*math.Expm1(0.016)/0.016)
	// Output: 1512.064 m, want 1512.064
}

func ExampleProfile_Between() {
	p, err := acoustics.NewProfile([]float64{0}, []float64{1500}, acoustics.Linear)
	if err != nil {
		fmt.Println(err)
		return
	}
	path, ok := p.Between(1, 13, 9)
	fmt.Printf("%t: sine %.1f, cosine %.1f, %.3f s\n", ok, path.Sin, path.Cos, path.TimeS)
	// Output: true: sine 0.6, cosine 0.8, 0.010 s
}

func ExampleProfile_Thin() {
	depths, speeds := make([]float64, 201), make([]float64, 201)
	for i := range depths {
		depths[i] = float64(i) / 10
		speeds[i] = 1490 - 0.4*depths[i]
	}
	p, err := acoustics.NewProfile(depths, speeds, acoustics.Linear)
	if err != nil {
		fmt.Println(err)
		return
	}
	thin := p.Thin(acoustics.Reach{HeadMinM: 0.5, HeadMaxM: 0.5, AngleMaxRad: 65 * math.Pi / 180, DepthM: 20})
	fmt.Println(p.Samples() > 200, thin.Samples() < 8)
	// Output: true true
}

func ExampleParseInterpolation() {
	kind, err := acoustics.ParseInterpolation("steps")
	fmt.Println(kind, err)
	// Output: steps <nil>
}
