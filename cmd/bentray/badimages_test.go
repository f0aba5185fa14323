package main

import (
	"maps"
	"strings"
	"testing"
)

const (
	pulseRays   = "[rays]\nmodel = \"pulse\"\n"
	imageRays   = "[rays]\nmodel = \"multiview\"\ncameras = \"cameras.csv\"\n"
	goodCameras = "camera,x,y,z\na,0,0,60\nb,20,5,60\n"
	goodImages  = "x,y,z,views\n5,6,-10,a b\n"
)

// wrongCameras is a job of images with the camera file given; keys are more of [rays].
func wrongCameras(name, text, keys, want string) badInput {
	return badInput{
		name: "cameras: " + name, files: map[string]string{"cameras.csv": text, "raw/a.csv": goodImages},
		old: pulseRays, new: imageRays + keys, want: want,
	}
}

// wrongImageCalls are jobs of images that are refused before anything is written.
var wrongImageCalls = []badInput{
	wrongCameras("no ids", "x,y,z\n0,0,60\n20,5,60\n", "", `cameras.csv: no column "camera", want the camera's id in it, as the column views of the clouds has it`),
	wrongCameras("no z", "camera,x,y\na,0,0\n", "", `cameras.csv: no column "z" (it is needed); the columns are camera, x, y`),
	wrongCameras("none", "camera,x,y,z\n", "", `cameras.csv: there are no camera records, want at least 1`),
	wrongCameras("twice", goodCameras+"a,40,5,60\n", "", `cameras.csv: line 4: camera "a" stands twice, in records 1 and 3, want each camera once`),
	wrongCameras("no id", goodCameras+",40,5,60\n", "", `cameras.csv: line 4: id of the camera is empty, want one for every camera`),
	wrongCameras("a blank in an id", goodCameras+"c 1,40,5,60\n", "", `cameras.csv: line 4: camera "c 1" has a blank or a ";" in its id, which separate ids in the views of points; want an id without`),
	wrongCameras("a text", goodCameras+"c,40,5,high\n", "", `cameras.csv: line 4: z is "high", want a number`),
	wrongCameras("no height", goodCameras+"c,40,5,\n", "", `cameras.csv: line 4: camera "c" has no z, want a number for every camera`),
	wrongCameras("angles partly", "camera,x,y,z,omega,phi,kappa\na,0,0,60,1,2,3\nb,20,5,60,1,,3\n", "", `cameras.csv: line 3: camera "b" has no phi, want a number for every camera`),
	wrongCameras("an angle missing", "camera,x,y,z,omega,phi\na,0,0,60,1,2\n", "", `cameras.csv: cameras have omega, phi without kappa, want all of them or none`),
	wrongCameras("angles in gon", "camera,x,y,z,omega,phi,kappa\na,0,0,60,1,2,399\n", "", `cameras.csv: line 2: camera "a": kappa is 399, want degrees from -360 to 360`),
	wrongCameras("two rotations", "camera,x,y,z,omega,phi,kappa,r11,r12,r13,r21,r22,r23,r31,r32,r33\na,0,0,60,0,0,0,1,0,0,0,1,0,0,0,1\n", "", `cameras.csv: cameras have omega, phi, kappa and also r11 to r33, want one of the two`),
	wrongCameras("part of a matrix", "camera,x,y,z,r11,r12,r13,r21,r22,r23\na,0,0,60,1,0,0,0,1,0\n", "", `cameras.csv: cameras have r11, r12, r13, r21, r22, r23 without r31, r32, r33, want all of them or none`),
	wrongCameras("no rotation", "camera,x,y,z,r11,r12,r13,r21,r22,r23,r31,r32,r33\na,0,0,60,1,0,0,0,1,0,0,0,1.01\n", "", `cameras.csv: line 2: camera "a": r11 to r33 are no rotation: a product of two columns, or the square of one, misses by 0.02, want less than 0.001; take the matrix with more decimals, unscaled`),
	wrongCameras("a mirror", "camera,x,y,z,r11,r12,r13,r21,r22,r23,r31,r32,r33\na,0,0,60,1,0,0,0,1,0,0,0,-1\n", "", `cameras.csv: line 2: camera "a": r11 to r33 mirror (their determinant is -1), want a rotation from a right-handed camera frame: x to the right, y to the image's top, z backwards`),
	wrongCameras("focal length alone", "camera,x,y,z,focal_px\na,0,0,60,3000\n", "", `cameras.csv: cameras have focal_px without width_px, height_px, want all of them or none`),
	wrongCameras("focal length 0", "camera,x,y,z,focal_px,width_px,height_px\na,0,0,60,0,4000,3000\n", "", `cameras.csv: line 2: camera "a": focal_px is 0, want more than 0 pixels`),
	wrongCameras("principal point alone", "camera,x,y,z,cx_px,cy_px\na,0,0,60,2000,1500\n", "", `cameras.csv: cameras have cx_px, cy_px without focal_px, width_px, height_px, want these too or neither`),
	wrongCameras("a time without offset", "camera,x,y,z,time\na,0,0,60,2026-03-04T05:00:00\n", "", `cameras.csv: line 2: time is "2026-03-04T05:00:00", want UTC seconds since 1970, or a date and time with its offset such as 2026-05-01T10:30:00Z`),
	wrongCameras("GPS times", "camera,x,y,z,gps_time\na,0,0,60,1\n", "", `cameras.csv: times in column "gps_time" are not read in a file beside the clouds, want a column "time" in UTC (seconds since 1970, or dates with their offset); rename what holds at all times`),
	wrongCameras("image residual without rotations", goodCameras, "residual = \"image\"\n", `cameras.csv: the cameras have no rotations, which residual = "image" needs; give omega, phi, kappa or r11 to r33, or use residual = "angle"`),
	wrongCameras("under the level", "camera,x,y,z\na,0,0,-60\nb,20,5,0\n", "", `job.toml: cameras.csv: no camera is above the water: z of the cameras is -60.000 to 0.000, and the water level 0; are both in one vertical reference and unit? (camera_medium = "water" is for cameras under water)`),
	wrongCameras("above the level though in water", goodCameras, "camera_medium = \"water\"\n", `job.toml: cameras.csv: no camera is below the water, as camera_medium = "water" says: z of the cameras is 60.000 to 60.000, and the water level 0; are both in one vertical reference and unit?`),
	{name: "cameras missing", old: pulseRays, new: imageRays, want: `job.toml: [rays] cameras: cameras.csv: no such file or directory`},
}

// badImages fail alone: raw/a.csv is done beside them.
var badImages = []struct{ name, cloud, want string }{
	{"unknown camera", goodImages + "5,6,-9,a B b\n5,6,-9,a c\n", `raw/b.csv: line 3: views has an unknown id: camera "B" is none of the 2 known; did you mean "b"?`},
	{"file names for ids", goodImages + "5,6,-9,a;img/B.JPG\n", `raw/b.csv: line 3: views has an unknown id: camera "img/B.JPG" is none of the 2 known; did you mean "b"?`},
	{"commas between", "x,y,z,views\n5,6,-9,\"a,b\"\n", `raw/b.csv: line 2: views has an unknown id: camera "a,b" is none of the 2 known; commas do not separate ids, want blanks or ";" between`},
	{"two columns of views", "x,y,z,Views,VIEWS\n5,6,-9,a b,\n", `raw/b.csv: columns "Views" and "VIEWS" both answer to "views", want one; name it in [input.columns]`},
	{"ray_count there", "x,y,z,views,ray_count\n5,6,-9,a b,2\n", `raw/b.csv: the file already has a column "ray_count", which bentray would add; rename it there, or take the raw cloud if this file is an output`},
}

func TestBadImagesFailAlone(t *testing.T) {
	for _, c := range badImages {
		t.Run(c.name, func(t *testing.T) {
			badInput{files: map[string]string{"cameras.csv": goodCameras, "raw/a.csv": goodImages, "raw/b.csv": c.cloud}, old: pulseRays, new: imageRays}.lay(t)
			code, out, errs := call(t, "run", "job.toml")
			want(t, "run", code, exitPartly, errs, "failed: "+c.want+"\n")
			if !strings.HasPrefix(out, "job.toml: 2 files: 1 done, 1 failed\n") {
				t.Errorf("the report is %q", out)
			}
			if after := listing(t); after["true/b.csv"] != "" || after["true/a.csv"] == "" {
				t.Errorf("outputs are %q and %q", after["true/a.csv"], after["true/b.csv"])
			}
		})
	}
}

// A row that names an unknown camera can be diverted; an empty cell is no fault but few rays.
func TestDivertedViews(t *testing.T) {
	badInput{
		files: map[string]string{"cameras.csv": goodCameras, "raw/a.csv": goodImages + "5,6,-9,a c\n5,6,-9,\n5,6,-9,b a a\n"},
	}.lay(t)
	put(t, "job.toml", strings.Replace(strings.Replace(goodJob, pulseRays, imageRays, 1), "[output]", "bad_rows = \"divert\"\n[output]", 1))
	code, out, errs := call(t, "run", "job.toml")
	want(t, "run", code, exitDone, errs, "")
	after := listing(t)
	const wantRejects = "line,reason,text\n3,\"views has an unknown id: camera \"\"c\"\" is none of the 2 known, want their ids, with blanks or \"\";\"\" between\",\"5,6,-9,a c\"\n"
	if rejects := after["true/a.csv.rejects.csv"]; rejects != wantRejects {
		t.Errorf("the rejects are\n%s", rejects)
	}
	for _, line := range []string{"  corrected                2   66.7 %\n", "  few_rays                 1   33.3 %\n", "  1 of 4 rows could not be read and were diverted\n"} {
		if !strings.Contains(out, line) {
			t.Errorf("the report is\n%s, want %q in it", out, line)
		}
	}
}

// Images cannot tell who saw a point where they have rotations but no focal lengths, and no
// cloud says: each cloud without views fails, one with views is done.
func TestImagesWithoutFocalLength(t *testing.T) {
	badInput{
		files: map[string]string{"cameras.csv": "camera,x,y,z,omega,phi,kappa\na,0,0,60,0,0,0\nb,20,5,60,0,0,0\n", "raw/a.csv": "x,y,z\n5,6,-9\n", "raw/b.csv": goodImages},
		old:   pulseRays, new: imageRays,
	}.lay(t)
	before := listing(t)
	const message = `raw/a.csv: no column "views" tells which cameras saw a point, and cameras.csv has rotations but no focal_px, width_px and height_px to tell it from the images; give one or the other, or leave the rotations out to take all cameras within max_off_nadir` + "\n"
	code, _, errs := call(t, "plan", "job.toml")
	want(t, "plan", code, exitPartly, errs, "would fail: "+message)
	if after := listing(t); !maps.Equal(before, after) {
		t.Error("a plan wrote something")
	}
	code, _, errs = call(t, "run", "job.toml")
	want(t, "run", code, exitPartly, errs, "failed: "+message)
}

// A job of two sensors: the views of a point must be its own sensor's.
func TestViewsOfAnotherSensor(t *testing.T) {
	rays := "[[sensor]]\nname = \"dawn\"\nwhere.strip = [1]\nrays = { model = \"multiview\", cameras = \"cameras.csv\" }\n" +
		"[[sensor]]\nname = \"dusk\"\nwhere.strip = [2]\nrays = { model = \"multiview\", cameras = \"dusk.csv\" }\n"
	badInput{
		files: map[string]string{
			"cameras.csv": goodCameras, "dusk.csv": "camera,x,y,z\nc,0,0,60\nd,20,5,60\n",
			"raw/a.csv": "x,y,z,views,strip\n5,6,-10,a b,1\n5,6,-10,c d,2\n", "raw/b.csv": "x,y,z,views,strip\n5,6,-10,a b,1\n5.5,6,-10,a b,2\n",
		},
		old: pulseRays, new: rays,
	}.lay(t)
	code, _, errs := call(t, "run", "job.toml")
	want(t, "run", code, exitPartly, errs, "failed: raw/b.csv: views of the point at 5.500, 6.000, which is of sensor \"dusk\": camera \"a\" is none of the 2 known, want their ids, with blanks or \";\" between; another sensor's cameras have the id\n")
}
