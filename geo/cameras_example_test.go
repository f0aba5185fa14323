package geo_test

import (
	"fmt"

	"bentray/geo"
)

// threeCameras returns cameras 60 m above a cove, the last one tilted to the east, with
// images of 90 m by 60 m.
func threeCameras() (*geo.Cameras, error) {
	return geo.NewCameras(geo.CameraRecords{
		ID: []string{"C1", "C2", "C3"}, X: []float64{0, 30, 60}, Y: []float64{0, 0, 0}, Z: []float64{60, 60, 60},
		Omega: []float64{0, 0, 0}, Phi: []float64{0, 0, -40}, Kappa: []float64{0, 0, 0},
		FocalPx: []float64{3600, 3600, 3600}, WidthPx: []float64{5400, 5400, 5400}, HeightPx: []float64{3600, 3600, 3600},
	})
}

func ExampleCameras_AppendViews() {
	cameras, err := threeCameras()
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(cameras.AppendViews(nil, []byte("C3;C1 C3")))
	fmt.Println(cameras.AppendViews(nil, []byte("C1 c2.jpg")))
	// Output:
	// [0 2] <nil>
	// [] camera "c2.jpg" is none of the 3 known; did you mean "C2"?
}

func ExampleVisibility_AppendSeeing() {
	cameras, err := threeCameras()
	if err != nil {
		fmt.Println(err)
		return
	}
	byImage, err := cameras.ByImage()
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, x := range []float64{20, 70, 200} {
		fmt.Println(x, byImage.AppendSeeing(nil, x, 5, 0))
	}
	// Output:
	// 20 [0 1]
	// 70 [1 2]
	// 200 [2]
}

func ExampleNewCameras() {
	_, err := geo.NewCameras(geo.CameraRecords{
		ID: []string{"C1", "C2", "C1"}, X: []float64{0, 30, 60}, Y: []float64{0, 0, 0}, Z: []float64{60, 60, 60},
	})
	fmt.Println(err)
	// Output:
	// record 3: camera "C1" stands twice, in records 1 and 3, want each camera once
}
