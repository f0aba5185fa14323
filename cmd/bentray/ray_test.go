package main

import (
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

var anyNumber = regexp.MustCompile(`-?\d+\.\d+`)

// steps are the numbers with decimals of each printed line, by its first words.
func steps(t *testing.T, text string) map[string][]float64 {
	t.Helper()
	all := map[string][]float64{}
	for _, line := range strings.Split(strings.TrimSpace(text), "\n") {
		name := strings.TrimSpace(line[:min(14, len(line))])
		for _, digits := range anyNumber.FindAllString(line[min(14, len(line)):], -1) {
			v, err := strconv.ParseFloat(digits, 64)
			if err != nil {
				t.Fatal(err)
			}
			all[name] = append(all[name], v)
		}
	}
	return all
}

// One ray in the plane y = 0 over a level surface, by plain trigonometry.
func TestRayByTrigonometry(t *testing.T) {
	for _, c := range []struct{ originX, originZ, pointX, pointZ, level float64 }{
		{0, 400, 120, -6, 0.42},
		{120, 300, -30, -25, -1.5},
		{-5, 500, -5, -3, 0},
	} {
		f := func(v float64) string { return strconv.FormatFloat(v, 'f', -1, 64) }
		code, out, errs := call(t, "ray", "--origin", f(c.originX)+",0,"+f(c.originZ), "--point", f(c.pointX)+",0,"+f(c.pointZ), "--level", f(c.level), "--temperature", "17.5", "--salinity", "34.9")
		want(t, "ray", code, exitDone, errs, "")
		got := steps(t, out)
		if len(got["phase index"]) != 2 || len(got["group index"]) != 2 {
			t.Fatalf("the steps are\n%s", out)
		}
		air, water := got["phase index"][0], got["phase index"][1]
		ranges, group := got["group index"][0], got["group index"][1]

		slant, drop, run := math.Hypot(c.pointX-c.originX, c.originZ-c.pointZ), c.originZ-c.pointZ, c.pointX-c.originX
		sine := math.Abs(run) / slant
		bent := sine * air / water
		rawRange := slant * (c.level - c.pointZ) / drop
		trueRange := rawRange * ranges / group
		entryX := c.pointX - run*(c.level-c.pointZ)/drop
		trueX := entryX + math.Copysign(trueRange*bent, run)
		depth := trueRange * math.Sqrt(1-bent*bent)
		for name, numbers := range map[string][]float64{
			"incidence":  {math.Asin(sine) * 180 / math.Pi, sine},
			"entry":      {entryX, 0, c.level},
			"refraction": {math.Asin(bent) * 180 / math.Pi, bent, sine, air, water},
			"raw range":  {rawRange},
			"true range": {trueRange, rawRange, ranges, group},
			"true point": {trueX, 0, c.level - depth},
			"depth":      {depth, c.level},
			"moved":      {c.level - depth - c.pointZ, math.Abs(trueX - c.pointX)},
		} {
			if len(got[name]) != len(numbers) {
				t.Fatalf("%s has numbers %v, want %v", name, got[name], numbers)
			}
			for i, v := range numbers {
				if !(math.Abs(got[name][i]-v) <= tolerance(name)) {
					t.Errorf("%s: number %d is %v, want %v", name, i+1, got[name][i], v)
				}
			}
		}
	}
}

// tolerance is half a unit of the last printed digit of a step, and a little for
// the printed indices.
func tolerance(step string) float64 {
	if step == "depth" || step == "moved" {
		return 0.51e-4
	}
	return 0.51e-6
}

func TestRayThatIsNotCorrected(t *testing.T) {
	base := []string{"ray", "--level", "0.42", "--temperature", "17.5", "--salinity", "34.9"}
	for _, c := range []struct{ origin, point, want string }{
		{"0,0,400", "120,0,6", "dry"},
		{"0,0,-400", "120,0,-6", "no_origin"},
		{"0,0,400", "1200,0,-6", "grazing"},
		{"0,0,400", "nan,0,-6", "invalid"},
	} {
		code, out, errs := call(t, append(base, "--origin", c.origin, "--point", c.point)...)
		want(t, c.want, code, exitNothing, errs, "bentray: the point is not corrected: "+c.want+"\n")
		if strings.Contains(out, "true point") || !strings.Contains(out, "apparent") {
			t.Errorf("%s: the steps are\n%s", c.want, out)
		}
	}
	for _, c := range []struct{ flag, text, want string }{
		{"--point", "1,2", `bentray: --point is "1,2", want three numbers: X,Y,Z`},
		{"--origin", "1,2,high", `bentray: --origin is "1,2,high", want three numbers: X,Y,Z`},
		{"--max-incidence", "90", `bentray: --max-incidence is 90, want above 0 and below 90`},
	} {
		code, _, errs := call(t, append(base, "--origin", "0,0,400", "--point", "1,2,-3", c.flag, c.text)...)
		want(t, c.flag, code, exitCall, errs, c.want+"\n")
	}
}
