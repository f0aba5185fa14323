package demo

import "math"

// The flight. Times count from takeOffS, an adjusted standard GPS time:
// 2026-05-19T09:30:00Z is 1779183000 s since 1970, less 315964800 s (1980-01-06),
// plus 18 leap seconds, less 1e9.
const (
	takeOffS     = 463_218_218
	heightM      = 350.0 // above the water
	speedMS      = 60.0
	lineS        = 10  // length of a line
	lineEveryS   = 200 // from start to start
	recordsPerS  = 10  // of the trajectory
	pulsesPerS   = 4000
	pulseRecords = pulsesPerS / recordsPerS // pulses from record to record
)

// The gap: records of one line are missing, and pulses go on.
const (
	maxGapS   = 1.0 // what the job allows
	gapLine   = 2
	gapFromS  = 4 // the record there is the last one before the gap
	gapUntilS = 6 // and this the first one after it
)

// flightLine is a straight line of the flight, with the sway of an aircraft.
type flightLine struct {
	number   int
	from     vec // m, where it starts, at flying height
	heading  vec // unit, level
	folder   string
	position []vec // one a record, in millimetres as the file has them
}

// flightLines returns four lines from side to side, flown to and fro, and a
// line across them.
func flightLines() []*flightLine {
	at := func(u, v float64) vec { return vec{cornerX + u, cornerY + v, levelM + heightM} }
	east, west, north := vec{x: 1}, vec{x: -1}, vec{y: 1}
	lines := []*flightLine{
		{number: 1, from: at(0, 100), heading: east},
		{number: 2, from: at(widthM, 220), heading: west},
		{number: 3, from: at(0, 340), heading: east},
		{number: 4, from: at(widthM, 460), heading: west},
		{number: 5, from: at(mouthX, -10), heading: north, folder: "cross_line"},
	}
	return flown(lines)
}

// flown gives lines their records.
func flown(lines []*flightLine) []*flightLine {
	for _, l := range lines {
		for i := range lineS*recordsPerS + 1 {
			l.position = append(l.position, l.flown(float64(i)/recordsPerS).round(1e3))
		}
	}
	return lines
}

// flown returns where the laser is some seconds after the start of the line.
func (l *flightLine) flown(seconds float64) vec {
	side, phase := l.heading.left(), seconds+float64(l.number)
	p := l.from.plus(speedMS*seconds, l.heading).plus(1.5*math.Sin(2*math.Pi*phase/7), side)
	p.z += 2 * math.Sin(2*math.Pi*phase/5)
	return p
}

// startS is when the line starts, in seconds since the take-off.
func (l *flightLine) startS() int64 { return int64(l.number-1) * lineEveryS }

// origin returns where the laser is at a pulse of the line: on the straight way
// from one record of the trajectory to the next.
func (l *flightLine) origin(pulse int) vec {
	record, part := pulse/pulseRecords, float64(pulse%pulseRecords)/pulseRecords
	a, b := l.position[record], l.position[record+1]
	return a.plus(part, b.minus(a))
}

// isRecorded tells whether the trajectory file has a record.
func (l *flightLine) isRecorded(record int) bool {
	return l.number != gapLine || record <= gapFromS*recordsPerS || record >= gapUntilS*recordsPerS
}

// hasOrigin tells whether the trajectory file says where a pulse came from.
func (l *flightLine) hasOrigin(pulse int) bool {
	return l.number != gapLine || pulse <= gapFromS*pulsesPerS || pulse >= gapUntilS*pulsesPerS
}
