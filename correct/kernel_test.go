package correct_test

import (
	"fmt"
	"testing"

	"bentray/correct"
	"bentray/correct/acoustics"
)

func TestUnequalLengthsPanic(t *testing.T) {
	for name, call := range map[string]func(s *survey){
		"MarkInvalid":   func(s *survey) { s.raw.Z = nil; correct.MarkInvalid(s.out, s.raw) },
		"MarkNoSurface": func(s *survey) { s.planes.SlopeY = nil; correct.MarkNoSurface(s.out, s.planes) },
		"MarkDry":       func(s *survey) { s.dst.Depth = nil; s.mark() },
		"MarkNoOrigin":  func(s *survey) { s.origin.X = nil; correct.MarkNoOrigin(s.out, s.raw, s.origin, s.planes) },
		"Vertical":      func(s *survey) { s.light.Water = nil; s.vertical() },
		"Pulse":         func(s *survey) { s.light.WaterGroup = nil; s.pulse(limit) },
		"MarkNoHead":    func(s *survey) { s.origin.X = nil; correct.MarkNoHead(s.out, s.raw, s.origin, s.planes) },
		"Sounding":      func(*survey) { s := straight(t, 3, 5); s.sound.AssumedSpeed = nil; s.run() },
		"Sounding, of":  func(*survey) { s := straight(t, 3, 5); s.sound.Profile = []int32{0}; s.run() },
		"Sounding, dst": func(*survey) { s := straight(t, 3, 5); s.dst.Passage = nil; s.run() },
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if got := recover(); got != "correct: columns of unequal length" {
					t.Errorf("panic is %v, want one that speaks of columns of unequal length", got)
				}
			}()
			call(simulate(3, 20, 0, noOffset))
		})
	}
}

// The true point may overwrite the raw one.
func TestResultOverRaw(t *testing.T) {
	for name, kernel := range map[string]func(s *survey){
		"Vertical": (*survey).vertical,
		"Pulse":    func(s *survey) { s.pulse(limit) },
	} {
		t.Run(name, func(t *testing.T) {
			apart, over := simulate(33, 24, 0.05, noOffset), simulate(33, 24, 0.05, noOffset)
			apart.raw.Z[4], over.raw.Z[4] = 100, 100 // dry
			over.dst.XYZ = over.raw
			kernel(apart)
			kernel(over)
			for i := range apart.out {
				if over.dst.X[i] != apart.dst.X[i] || over.dst.Y[i] != apart.dst.Y[i] || over.dst.Z[i] != apart.dst.Z[i] {
					t.Errorf("point %d differs", i)
				}
			}
		})
	}
}

func TestNoAllocation(t *testing.T) {
	s := simulate(1000, 24, 0.05, noOffset)
	sonar := straight(t, 1000, 40)
	for name, kernel := range map[string]func(){
		"marks and Vertical": s.vertical,
		"marks and Pulse":    func() { s.pulse(limit) },
		"MarkNoOrigin":       func() { correct.MarkNoOrigin(s.out, s.raw, s.origin, s.planes) },
		"marks and Sounding": sonar.run,
		"MarkNoHead":         func() { correct.MarkNoHead(sonar.out, sonar.raw, sonar.origin, sonar.planes) },
	} {
		if got := testing.AllocsPerRun(20, kernel); got != 0 {
			t.Errorf("%s: %g allocations a call, want 0", name, got)
		}
	}
}

// chunk is the number of points that the program hands to a kernel at once.
const chunk = 64 << 10

func bench(b *testing.B, s *survey, kernel func(*survey)) {
	b.ReportAllocs()
	b.SetBytes(int64(len(s.out)) * 24)
	for b.Loop() {
		clear(s.out)
		kernel(s)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(s.out)), "ns/point")
}

func BenchmarkVertical(b *testing.B) {
	bench(b, simulate(chunk, 24, 0, noOffset), func(s *survey) {
		correct.Vertical(&s.dst, s.out, s.raw, s.planes, s.light)
	})
}

func BenchmarkPulse(b *testing.B) {
	pulse := func(s *survey) {
		correct.Pulse(&s.dst, s.out, s.raw, s.origin, s.planes, s.light, limit)
	}
	b.Run("tilted", func(b *testing.B) { bench(b, simulate(chunk, 24, 0.05, noOffset), pulse) })
	b.Run("nadir", func(b *testing.B) { bench(b, simulate(chunk, 0, 0, noOffset), pulse) })
	b.Run("grazing", func(b *testing.B) {
		bench(b, simulate(chunk, 24, 0.05, noOffset), func(s *survey) {
			correct.Pulse(&s.dst, s.out, s.raw, s.origin, s.planes, s.light, 0)
		})
	})
}

func BenchmarkMarks(b *testing.B) {
	bench(b, simulate(chunk, 24, 0.05, noOffset), func(s *survey) {
		s.mark()
		correct.MarkNoOrigin(s.out, s.raw, s.origin, s.planes)
	})
}

// All layers down to 50 m of 60 are crossed.
func BenchmarkSounding(b *testing.B) {
	for _, layers := range []int{40, 500} {
		for _, isAssumed := range []bool{false, true} {
			name := fmt.Sprintf("speed/%d", layers)
			if isAssumed {
				name = fmt.Sprintf("profile/%d", layers)
			}
			b.Run(name, func(b *testing.B) {
				s := straight(b, chunk/16, layers*6/5)
				for i := range s.raw.Z {
					s.raw.Z[i] = s.origin.Z[i] - 50
				}
				if isAssumed {
					s.sound.Assumed = springSea.profile(b, layers*6/5, acoustics.Linear)
				}
				b.ReportAllocs()
				for b.Loop() {
					clear(s.out)
					correct.Sounding(&s.dst, s.out, s.raw, s.origin, s.planes, &s.sound)
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(s.out)), "ns/point")
			})
		}
	}
}
