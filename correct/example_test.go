package correct_test

import (
	"fmt"
	"math"

	"bentray/correct"
	"bentray/correct/acoustics"
	"bentray/correct/optics"
)

func ExampleMarkDry() {
	raw := correct.XYZ{X: []float64{0, 5}, Y: []float64{0, 5}, Z: []float64{1.25, -2}}
	surface := correct.Planes{Level: []float64{0.5, 0.5}, SlopeX: []float64{0, 0}, SlopeY: []float64{0, 0}}
	dst, out := correct.NewResult(2), make([]correct.Outcome, 2)
	correct.MarkInvalid(out, raw)
	correct.MarkNoSurface(out, surface)
	correct.MarkDry(out, &dst, raw, surface)
	fmt.Println(out, dst.Depth[0])
	// Output: [dry corrected] -0.75
}

func ExampleMarkInvalid() {
	out := make([]correct.Outcome, 2)
	correct.MarkInvalid(out, correct.XYZ{X: []float64{1, 2}, Y: []float64{1, 2}, Z: []float64{-3, math.NaN()}})
	fmt.Println(out)
	// Output: [corrected invalid]
}

func ExampleMarkNoSurface() {
	out := make([]correct.Outcome, 2)
	correct.MarkNoSurface(out, correct.Planes{Level: []float64{0.4, math.NaN()}, SlopeX: []float64{0, 0}, SlopeY: []float64{0, 0}})
	fmt.Println(out)
	// Output: [corrected no_surface]
}

func ExampleMarkNoOrigin() {
	raw := correct.XYZ{X: []float64{0, 0}, Y: []float64{0, 0}, Z: []float64{-2, -2}}
	scanner := correct.XYZ{X: []float64{10, 10}, Y: []float64{0, 0}, Z: []float64{300, -1}}
	surface := correct.Planes{Level: []float64{0, 0}, SlopeX: []float64{0, 0}, SlopeY: []float64{0, 0}}
	out := make([]correct.Outcome, 2)
	correct.MarkNoOrigin(out, raw, scanner, surface)
	fmt.Println(out)
	// Output: [corrected no_origin]
}

func ExampleVertical() {
	raw := correct.XYZ{X: []float64{0}, Y: []float64{0}, Z: []float64{-2.5}}
	surface := correct.Planes{Level: []float64{0.5}, SlopeX: []float64{0}, SlopeY: []float64{0}}
	light := correct.Light{Air: 1.00028, Water: []float64{1.34}}
	dst, out := correct.NewResult(1), make([]correct.Outcome, 1)
	correct.Vertical(&dst, out, raw, surface, light)
	fmt.Printf("%s, depth %.3f, z %.3f\n", out[0], dst.Depth[0], dst.Z[0])
	// Output: corrected, depth 4.019, z -3.519
}

func ExamplePulse() {
	raw := correct.XYZ{X: []float64{0}, Y: []float64{0}, Z: []float64{-10}}
	scanner := correct.XYZ{X: []float64{300}, Y: []float64{0}, Z: []float64{740}}
	surface := correct.Planes{Level: []float64{0}, SlopeX: []float64{0}, SlopeY: []float64{0}}
	light := correct.Light{Air: 1.00028, RangeIndex: 1.00029, Water: []float64{1.34}, WaterGroup: []float64{1.362}}
	dst, out := correct.NewResult(1), make([]correct.Outcome, 1)
	correct.Pulse(&dst, out, raw, scanner, surface, light, math.Pi/3)
	fmt.Printf("%s, x %.3f, depth %.3f, %.2f degrees\n", out[0], dst.X[0], dst.Depth[0], dst.IncidenceRad[0]*180/math.Pi)
	// Output: corrected, x 1.807, depth 7.600, 21.80 degrees
}

// Two cameras 30 m above the water see a point between them along rays of 3, 4 and 5: 3 m down and
// 4 m across in the air, 4 m down and 3 m across in water of index 4/3. Prolonged straight they
// meet 2.25 m below the surface; the point is at 4 m.
func ExampleMultiviewSolver_Solve() {
	raw := correct.XYZ{X: []float64{0}, Y: []float64{0}, Z: []float64{-2.25}}
	bundle := correct.Bundle{
		Views:           correct.Views{Start: []int32{0, 2}, Camera: []int32{0, 1}},
		Cameras:         &correct.Cameras{XYZ: correct.XYZ{X: []float64{-43, 43}, Y: []float64{0, 0}, Z: []float64{30, 30}}},
		Planes:          correct.Planes{Level: []float64{0, 0}, SlopeX: []float64{0, 0}, SlopeY: []float64{0, 0}},
		Light:           correct.Light{Air: 1, Water: []float64{4. / 3}},
		Residual:        correct.Angle,
		MaxIncidenceRad: math.Pi / 3,
	}
	dst, out := correct.NewResult(1), make([]correct.Outcome, 1)
	correct.MarkNoCameras(out, raw, &bundle)
	var solver correct.MultiviewSolver
	solver.Solve(&dst, out, nil, raw, &bundle)
	x, y := make([]float64, 2), make([]float64, 2)
	solver.EntryPlan(x, y, out, nil, raw, dst.XYZ, &bundle)
	fmt.Printf("%s at %.4f, entries at x %.4f and %.4f\n", out[0], dst.Z[0], x[0], x[1])
	// Output: corrected at -4.0000, entries at x -3.0000 and 3.0000
}

// Two cameras look down through 30 mm of gas and 12 mm of an invented glass at a point
// 4 m below it. The light has tangents of 4/3 in the gas, 5/12 in the pane, 3/4 in the water of index
// 4/3, and so comes from 0.04 + 0.005 + 3 m aside. Prolonged straight, the rays meet above the point.
func ExamplePort() {
	raw := correct.XYZ{X: []float64{0}, Y: []float64{0}, Z: []float64{4.042 - 3.045*3/4}}
	upright := [9]float64{1, 0, 0, 0, 1, 0, 0, 0, 1}
	bundle := correct.Bundle{
		Views: correct.Views{Start: []int32{0, 2}, Camera: []int32{0, 1}},
		Cameras: &correct.Cameras{
			XYZ:      correct.XYZ{X: []float64{-3.045, 3.045}, Y: []float64{0, 0}, Z: []float64{4.042, 4.042}},
			Rotation: [][9]float64{upright, upright},
		},
		Port:            &correct.Port{DistanceM: 0.03, Panes: []optics.Layer{{ThicknessM: 0.012, Index: 2.08}}, Normal: correct.PortNormal(0, 0)},
		Light:           correct.Light{Air: 1, Water: []float64{4. / 3}},
		MaxIncidenceRad: math.Pi / 3,
	}
	dst, out := correct.NewResult(1), make([]correct.Outcome, 1)
	var solver correct.MultiviewSolver
	solver.Solve(&dst, out, nil, raw, &bundle)
	fmt.Printf("%s from %.3f to %.3f, %.2f degrees in the housing\n", out[0], raw.Z[0], math.Abs(dst.Z[0]), dst.IncidenceRad[0]*180/math.Pi)
	// Output: corrected from 1.758 to 0.000, 53.13 degrees in the housing
}

func ExampleMarkWet() {
	raw := correct.XYZ{X: []float64{0, 5}, Y: []float64{0, 5}, Z: []float64{1.25, -2}}
	surface := correct.Planes{Level: []float64{0.5, 0.5}, SlopeX: []float64{0, 0}, SlopeY: []float64{0, 0}}
	dst, out := correct.NewResult(2), make([]correct.Outcome, 2)
	correct.MarkWet(out, &dst, raw, surface)
	fmt.Println(out[0], dst.Depth[1])
	// Output: corrected 2.5
}

func ExampleSounding() {
	water, err := acoustics.NewProfile([]float64{0, 5, 20}, []float64{1492, 1491, 1470}, acoustics.Linear)
	if err != nil {
		fmt.Println(err)
		return
	}
	raw := correct.XYZ{X: []float64{12}, Y: []float64{0}, Z: []float64{-16}}
	head := correct.XYZ{X: []float64{0}, Y: []float64{0}, Z: []float64{-0.4}}
	surface := correct.Planes{Level: []float64{0.1}, SlopeX: []float64{0}, SlopeY: []float64{0}}
	sound := correct.Sound{Profiles: []*acoustics.Profile{water}, AssumedSpeed: []float64{1500}}
	dst, out := correct.NewSoundResult(1), make([]correct.Outcome, 1)
	correct.Sounding(&dst, out, raw, head, surface, &sound)
	fmt.Printf("%s, depth %.2f, %.1f m/s at the head, %.1f at the bed\n", out[0], dst.Depth[0], dst.HeadSpeed[0], dst.BedSpeed[0])
	// Output: corrected, depth 15.99, 1491.9 m/s at the head, 1475.6 at the bed
}

func ExampleMarkNoHead() {
	raw := correct.XYZ{X: []float64{0, 0}, Y: []float64{0, 0}, Z: []float64{-2, -2}}
	head := correct.XYZ{X: []float64{1, 1}, Y: []float64{0, 0}, Z: []float64{-0.5, 0.5}}
	surface := correct.Planes{Level: []float64{0, 0}, SlopeX: []float64{0, 0}, SlopeY: []float64{0, 0}}
	out := make([]correct.Outcome, 2)
	correct.MarkNoHead(out, raw, head, surface)
	fmt.Println(out)
	// Output: [corrected no_origin]
}

// Mounted with its starboard edge 30 degrees down, on a vessel that goes north.
func ExampleFaceNormal() {
	n := correct.FaceNormal(math.Pi/6, 0, 0)
	fmt.Printf("%.3f %.3f %.3f\n", n.X, n.Y, n.Z)
	// Output: -0.500 0.000 -0.866
}
