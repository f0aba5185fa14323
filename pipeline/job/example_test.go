package job_test

import (
	"fmt"

	"bentray/pipeline/job"
)

func ExampleParse() {
	j, err := job.Parse("cove/job.toml", []byte(`
title = "Lantern Cove, spring flight"

[input]
files = ["raw/*.csv"]

[output]
folder = "true"

[water]
temperature = 17.5
salinity    = 34.9

[surface]
level = 0.42

[rays]
model      = "pulse"
trajectory = "flight.csv"
`))
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(j.Title)
	fmt.Println(j.Wavelength(j.Sensors[0]), "nm, at most", j.Limits.MaxIncidence, "degrees")
	// Output:
	// Lantern Cove, spring flight
	// 532 nm, at most 60 degrees
}

func ExampleParse_faults() {
	_, err := job.Parse("job.toml", []byte(`
input  = { files = ["raw/*.csv"] }
output = { folder = "true" }
water  = { temperature = 17.5, salinty = 34.9 }
rays   = { model = "vertical" }

[surface]
level       = "0.42"
temperature = 18
`))
	fmt.Println(err)
	// Output:
	// job.toml:4: unknown key "salinty" in [water]; did you mean "salinity"?
	// job.toml:8: [surface] level is a string, want a number
	// job.toml:9: unknown key "temperature" in [surface]; it belongs to [water] or [air]
}

func ExampleJob_Settings() {
	text := `
input.files    = ["raw/*.csv"]
output.folder  = "true"
water          = { temperature = 12, salinity = 0 }
surface.column = "tide"
rays.model     = "vertical"
`
	plain, _ := job.Parse("job.toml", []byte(text))
	titled, _ := job.Parse("job.toml", []byte(text+`title = "again"`))
	a, _ := plain.Settings()
	b, _ := titled.Settings()
	fmt.Println(string(a) == string(b))
	// Output: true
}

func ExampleJob_Wavelength() {
	j, err := job.Parse("job.toml", []byte(`
input.files   = ["raw/*.csv"]
output.folder = "true"
water         = { temperature = 12, salinity = 0 }
surface.level = 31.2

[[sensor]]
name  = "laser"
where = { point_source_id = [11, 12] }
rays  = { model = "pulse" }

[[sensor]]
name = "images"
rays = { model = "vertical" }
`))
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, s := range j.Sensors {
		fmt.Println(s.Name, j.Wavelength(s), "nm")
	}
	// Output:
	// laser 532 nm
	// images 550 nm
}
