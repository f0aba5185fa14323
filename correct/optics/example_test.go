package optics_test

import (
	"fmt"
	"math"
	"testing"

	"bentray/correct/optics"
)

func ExampleRefract() {
	down := optics.Vec{X: math.Sin(math.Pi / 9), Z: -math.Cos(math.Pi / 9)} // 20 degrees off nadir
	up := optics.Vec{Z: 1}
	inWater, ok := optics.Refract(down, up, 1.00028, 1.34)
	fmt.Printf("%t, %.3f degrees\n", ok, inWater.AngleRad(optics.Vec{Z: -1})*180/math.Pi)
	// Output: true, 14.792 degrees
}

func ExampleCriticalAngleRad() {
	fmt.Printf("%.2f degrees\n", optics.CriticalAngleRad(1.34, 1.00028)*180/math.Pi)
	// Output: 48.29 degrees
}

func ExamplePlateShift() {
	fmt.Printf("%.2f mm\n", 1000*optics.PlateShift(0.020, math.Pi/3, 1.5))
	// Output: 10.25 mm
}

func ExampleThroughPlate() {
	in := optics.Vec{X: 0.6, Z: 0.8}
	exit, out, ok := optics.ThroughPlate(optics.Vec{}, in, optics.Vec{Z: 1}, 0.010, 1.34, 1.49)
	fmt.Printf("%t, leaves %.2f mm aside, towards %.1f %.1f %.1f\n", ok, 1000*exit.X, out.X, out.Y, out.Z)
	// Output: true, leaves 6.41 mm aside, towards 0.6 0.0 0.8
}

func BenchmarkRefract(b *testing.B) {
	dir, up := optics.Vec{X: 0.6, Z: -0.8}, optics.Vec{Z: 1}
	var sum float64
	b.ReportAllocs()
	for b.Loop() {
		out, _ := optics.Refract(dir, up, 1.00028, 1.34)
		sum += out.X
	}
	if math.IsNaN(sum) {
		b.Fatal("refracted direction is not a number")
	}
}

func ExampleThroughPlane() {
	// A camera 3 m above the water sees a point 4 m below it and 7 m away.
	camera, point := optics.Vec{Z: 3}, optics.Vec{X: 7, Z: -4}
	entry, ok := optics.ThroughPlane(camera, point, optics.Vec{}, optics.Vec{Z: 1}, 1, 4./3)
	fmt.Printf("%.4f %v\n", entry.X, ok)
	// Output: 4.0000 true
}

func ExampleStack_Fermat() {
	// From 30 mm of gas through 12 mm of an invented glass to 4 m of water, 3.045 m aside.
	s := optics.NewStack(1, 4./3, optics.Layer{ThicknessM: 0.012, Index: 2.08})
	const run = 0.040 + 0.005 + 3
	ray := s.Fermat(0.03, 4, run*run, optics.Slopes{})
	fmt.Printf("%.4f in the gas, %.4f in the water\n", ray.Near*run, ray.Far*run)
	// Output: 1.3333 in the gas, 0.7500 in the water
}
