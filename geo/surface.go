package geo

// errLengths is the panic of every function that is given columns of different
// lengths, which is a fault of the caller.
const errLengths = "geo: columns have different lengths"

// FillLevel fills a chunk with a level water surface: level (m) is value
// everywhere, the slopes are 0. The three slices have one length; otherwise it
// panics.
func FillLevel(level, slopeX, slopeY []float64, value float64) {
	if len(slopeX) != len(level) || len(slopeY) != len(level) {
		panic(errLengths)
	}
	for i := range level {
		level[i] = value
	}
	clear(slopeX)
	clear(slopeY)
}

// Plane is a plane water surface: Level (m) is its elevation at the plan position
// AtX, AtY (m), SlopeX and SlopeY (dimensionless) are dz/dx and dz/dy.
type Plane struct {
	Level, AtX, AtY, SlopeX, SlopeY float64
}

// Fill fills a chunk with the plane: its elevation level (m) at each plan position
// x, y (m), and its slopes. The five slices have one length; otherwise it panics.
// level may be x or y itself. Where x or y is NaN, level is NaN.
//
// The elevation is taken from differences to AtX, AtY, so it keeps the accuracy
// of the positions when they are large; choose AtX, AtY within the survey.
func (p Plane) Fill(level, slopeX, slopeY, x, y []float64) {
	n := len(level)
	if len(slopeX) != n || len(slopeY) != n || len(x) != n || len(y) != n {
		panic(errLengths)
	}
	for i := range level {
		level[i] = p.Level + (p.SlopeX*(x[i]-p.AtX) + p.SlopeY*(y[i]-p.AtY))
		slopeX[i] = p.SlopeX
		slopeY[i] = p.SlopeY
	}
}
