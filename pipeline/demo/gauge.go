package demo

import (
	"math"
	"math/rand/v2"
	"time"
)

// The gauge: a sluice upstream opens with the first line over the river, so that the
// water rises during the flight. The gauge reads every minute, but is silent for two
// records; the job takes no level from there.
const (
	readingM     = 1.372 // of the gauge when the waterline was surveyed
	riseM        = 0.31
	riseS        = 600
	gaugeEveryS  = 60
	gaugeFirstS  = 2000 - 75 // s since the take-off
	gaugeRecords = 14
	silentFrom   = 9 // the first record that is missing
	silentUntil  = 11
	gaugeMaxGapS = 120.0 // what the job allows
)

// takeOff is takeOffS as UTC.
var takeOff = time.Date(2026, 5, 19, 9, 30, 0, 0, time.UTC)

// recordMM returns a record of the gauge, in millimetres as the file has it.
func recordMM(record int) int64 {
	part := min(max(float64(gaugeFirstS+record*gaugeEveryS-2000)/riseS, 0), 1)
	return int64(math.Round(1000 * (readingM + riseM*(1-math.Cos(math.Pi*part))/2)))
}

// riseAt returns how far the water has risen at a time since the take-off, and
// whether the file tells: linear from record to record.
func riseAt(timeUS int64) (rise float64, told bool) {
	since := timeUS - gaugeFirstS*1e6
	record := int(since / (gaugeEveryS * 1e6))
	into := since % (gaugeEveryS * 1e6)
	from, to := float64(recordMM(record)), float64(recordMM(record+1))
	reading := from + (to-from)*float64(into)/(gaugeEveryS*1e6)
	silent := record >= silentFrom-1 && record < silentUntil && !(record == silentFrom-1 && into == 0)
	return reading/1000 - readingM, !silent
}

// gaugeText is the file of the gauge.
func gaugeText() []byte {
	text := []byte("time,level\n")
	for record := range gaugeRecords {
		if record >= silentFrom && record < silentUntil {
			continue
		}
		at := takeOff.Add(time.Duration(gaugeFirstS+record*gaugeEveryS) * time.Second)
		text = append(at.AppendFormat(text, time.RFC3339), ',')
		text = append(appendFixed(text, recordMM(record), 3), '\n')
	}
	return text
}

// The waterline: points at the water's edge on both banks, some of which are wrong,
// as if they lay on overhanging grass.
const (
	waterlinePoints = 600
	waterlineNoiseM = 0.004
	blunderShare    = 0.12
	blunderMaxM     = 2.0
)

// waterlineText is the file of the waterline.
func waterlineText() []byte {
	random := rand.New(rand.NewPCG(600, 12))
	text := []byte("x,y,z\n")
	for i := range waterlinePoints {
		u, bank := reachEndM*random.Float64(), float64(2*(i%2)-1)
		p := vec{x: riverX + u, y: riverY + axisV(u) + bank*channelM}
		p.z = riverSurface.z(p.x, p.y) + waterlineNoiseM*random.NormFloat64()
		if random.Float64() < blunderShare {
			p.z += blunderMaxM * random.Float64()
		}
		text = append(appendVec(text, p, 3), '\n')
	}
	return text
}
