package geo

// poolDown appends to blocks the weighted regression of the levels that falls along
// the line, by pooling adjacent violators (Ayer and others 1955): a point joins the
// block before unless it lies below it and further along the line. Points without
// weight are left out.
func poolDown(blocks []block, chainage, level, weight []float64) []block {
	for i, w := range weight {
		if w == 0 {
			continue
		}
		b := newBlock(chainage[i], level[i], w)
		for len(blocks) > 0 {
			last := blocks[len(blocks)-1]
			if b.first > last.last && b.level < last.level {
				break
			}
			b, blocks = last.joined(b), blocks[:len(blocks)-1]
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
