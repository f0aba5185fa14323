package geo

import "math"

// poolSigmas is how many sigmas the levels of two neighbouring blocks must differ by
// to stay apart.
const poolSigmas = 3

// block is a run of level points that share one level.
type block struct{ weight, chainage, level float64 } // weighted means, m

// join adds another block.
func (b *block) join(o block) {
	sum := b.weight + o.weight
	b.chainage += (o.chainage - b.chainage) * (o.weight / sum)
	b.level += (o.level - b.level) * (o.weight / sum)
	b.weight = sum
}

// isApart tells whether o, the next block along the line, lies below b beyond what
// errors of sigma (m) explain, and further along the line.
func (b *block) isApart(o block, sigma float64) bool {
	return o.chainage > b.chainage && b.level-o.level > poolSigmas*sigma*math.Sqrt(1/b.weight+1/o.weight)
}

// poolDown appends to blocks the weighted regression of the levels that falls along
// the line, by pooling adjacent violators (Ayer and others 1955): a point joins the
// block before as long as it does not lie clearly below it. With sigma 0 it is the
// least-squares regression; a sigma above joins blocks whose difference the errors
// explain, which without it would stand as steps a few centimetres long (compare
// Schell and Singh 1997). Points without weight are left out.
func poolDown(blocks []block, chainage, level, weight []float64, sigma float64) []block {
	for i, w := range weight {
		if w == 0 {
			continue
		}
		b := block{weight: w, chainage: chainage[i], level: level[i]}
		for len(blocks) > 0 && !blocks[len(blocks)-1].isApart(b, sigma) {
			last := blocks[len(blocks)-1]
			last.join(b)
			b, blocks = last, blocks[:len(blocks)-1]
		}
		blocks = append(blocks, b)
	}
	return blocks
}

// medianRuns is how many runs of points at most take part in medianDown.
const medianRuns = 2000

// medianDown fills r with the differences of the levels to the falling regression of
// least absolute differences, by pooling adjacent violators under their median
// (Robertson and Wright 1973). More than medianRuns points count by the medians of
// runs of neighbours, since every pooling takes a median anew.
func medianDown(r, level []float64) {
	size := (len(level) + medianRuns - 1) / medianRuns
	var runs, scratch []float64
	for first := 0; first < len(level); first += size {
		scratch = append(scratch[:0], level[first:min(first+size, len(level))]...)
		runs = append(runs, median(scratch))
	}
	var starts []int // of the blocks among the runs
	var middles []float64
	for i, middle := range runs {
		start := i
		for len(starts) > 0 && middle >= middles[len(middles)-1] {
			start = starts[len(starts)-1]
			starts, middles = starts[:len(starts)-1], middles[:len(middles)-1]
			scratch = append(scratch[:0], runs[start:i+1]...)
			middle = median(scratch)
		}
		starts, middles = append(starts, start), append(middles, middle)
	}
	for i, k := 0, 0; i < len(level); i++ {
		for k+1 < len(starts) && starts[k+1] <= i/size {
			k++
		}
		r[i] = level[i] - middles[k]
	}
}
