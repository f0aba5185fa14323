package geo_test

import (
	"fmt"
	"math"

	"bentray/geo"
)

func ExampleFitPlane() {
	// Six points on two banks; the last was taken on a boulder.
	x := []float64{512000, 512040, 512080, 512000, 512040, 512080}
	y := []float64{7012000, 7012000, 7012000, 7012030, 7012030, 7012030}
	z := []float64{31.20, 31.16, 31.12, 31.20, 31.16, 31.92}
	fit, err := geo.FitPlane(x, y, z)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("slope to the east %.4f, %d set aside, last residual %.2f m\n", fit.SlopeX, fit.SetAside, fit.Residuals[5])

	_, err = geo.FitPlane(x[:3], y[:3], z[:3])
	fmt.Println(err)
	// Output:
	// slope to the east -0.0010, 1 set aside, last residual 0.80 m
	// waterline points lie on one line, want points on both banks, or give the plane by level and slopes
}

func ExampleNewProfile() {
	// A river that flows 200 m east, then 100 m north.
	lineX, lineY := []float64{0, 200, 200}, []float64{0, 0, 100}
	x, y, z := []float64{0, 100, 200, 195}, []float64{8, -6, 0, 100}, []float64{12.0, 11.9, 11.8, 11.6}
	river, err := geo.NewProfile(lineX, lineY, x, y, z, 30)
	if err != nil {
		fmt.Println(err)
		return
	}
	level, slopeX, slopeY := make([]float64, 3), make([]float64, 3), make([]float64, 3)
	river.Fill(level, slopeX, slopeY, []float64{50, 210, 50}, []float64{10, 50, 40})
	for i := range level {
		fmt.Printf("level %.2f m, fall %.4f\n", level[i], math.Hypot(slopeX[i], slopeY[i]))
	}
	// Output:
	// level 11.95 m, fall 0.0010
	// level 11.70 m, fall 0.0020
	// level NaN m, fall NaN
}

func ExampleNewGrid() {
	// Water that a laser met every metre on a square of 30 m, tilted by the wind.
	var x, y, z, t []float64
	for i := range 900 {
		px, py := float64(i%30), float64(i/30)
		x, y, z, t = append(x, px), append(y, py), append(z, 2+0.002*px), append(t, 100+px/60)
	}
	var points geo.SurfacePoints
	points.Add(x, y, z, t)
	water, err := geo.NewGrid(&points, geo.GridOptions{Cell: 3, Offset: 0.05})
	if err != nil {
		fmt.Println(err)
		return
	}
	level, slopeX, slopeY := make([]float64, 3), make([]float64, 3), make([]float64, 3)
	// Among the points; a minute later; with no time at all.
	water.Fill(level, slopeX, slopeY, []float64{10, 10, 10}, []float64{15, 15, 15}, []float64{100.2, 160, math.NaN()})
	fmt.Printf("%.3f\n%.3f\n", level, slopeX)
	// Output:
	// [2.070 NaN 2.070]
	// [0.002 NaN 0.002]
}
