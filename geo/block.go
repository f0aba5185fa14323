package geo

// block is a run of neighbouring level points and the straight line through them
// that fits best and does not rise.
type block struct {
	first, last             float64 // chainage of the first and last point, m
	count                   int     // points
	weight, chainage, level float64 // sum of weights; weighted means, m
	ss, sz, zz              float64 // weighted sums of squares and products of chainage and level about their means, m^2
}

// newBlock returns the block of one point.
func newBlock(chainage, level, weight float64) block {
	return block{first: chainage, last: chainage, count: 1, weight: weight, chainage: chainage, level: level}
}

// joined returns the block of the points of a and b, which follows it; sums of
// squares are joined as by Chan, Golub and LeVeque (1983).
func (a block) joined(b block) block {
	sum, ds, dz := a.weight+b.weight, b.chainage-a.chainage, b.level-a.level
	share := b.weight / sum
	return block{
		first: a.first, last: b.last, count: a.count + b.count,
		weight: sum, chainage: a.chainage + share*ds, level: a.level + share*dz,
		ss: a.ss + b.ss + share*a.weight*ds*ds,
		sz: a.sz + b.sz + share*a.weight*ds*dz,
		zz: a.zz + b.zz + share*a.weight*dz*dz,
	}
}

// slope returns that of the line, at most 0.
func (a *block) slope() float64 {
	if a.sz < 0 && a.ss > 0 {
		return a.sz / a.ss
	}
	return 0
}

// at returns the level of the line at a chainage, m.
func (a *block) at(chainage float64) float64 { return a.level + a.slope()*(chainage-a.chainage) }

// variance returns that of the line's level at a chainage, where that of a point is 1.
func (a *block) variance(chainage float64) float64 {
	v, d := 1/a.weight, chainage-a.chainage
	if a.ss > 0 {
		v += d * d / a.ss
	}
	return v
}

// parameters returns how many numbers its points determine: level and slope, or the
// level alone where all are at one chainage.
func (a *block) parameters() int {
	if a.ss > 0 {
		return 2
	}
	return 1
}

// misfit returns the weighted sum of squared residuals, m^2.
func (a *block) misfit() float64 { return max(a.zz-a.slope()*a.sz, 0) }
