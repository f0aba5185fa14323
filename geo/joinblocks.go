package geo

import (
	"container/heap"
	"math"
	"slices"
)

// joinBlocks joins neighbouring blocks, the two first whose joining adds least to the
// squared residuals, until one is left; of all stages it returns that with the least
// Bayesian information criterion (Schwarz 1978): n times the logarithm of the mean
// squared residual, for n points, plus log n for each parameter, of which a block has
// three: level, slope, and where it ends. Residuals far below scaleFloor count as
// that, so levels without noise do not fall apart into twos. It takes O(n log n) time.
func joinBlocks(blocks []block) []block {
	j := newJoining(blocks)
	n, sum := 0.0, 0.0
	for i := range blocks {
		n, sum = n+float64(blocks[i].count), sum+blocks[i].misfit()
	}
	best, stage := math.Inf(1), 0
	for k := range blocks {
		if k > 0 {
			sum += j.next(k)
		}
		criterion := n*math.Log(sum/n+scaleFloor*scaleFloor) + 3*float64(len(blocks)-k)*math.Log(n)
		if criterion <= best {
			best, stage = criterion, k
		}
	}
	return j.at(stage)
}

// joining joins neighbouring blocks by twos.
type joining struct {
	given, blocks []block   // as given; as joined so far, each in the place of its first one
	before, after []int     // neighbours of a block, of those left
	stage         []int     // at which a block was joined to the one before it; 0: not yet
	cost          []float64 // of the border after a block, m^2; NaN: none
	queue         borders
}

// border is where block ends and the next one begins; cost (m^2) is what joining the
// two adds to the sum of squared residuals.
type border struct {
	cost  float64
	block int
}

// borders is a heap.Interface; borders with equal costs go in their order on the line.
type borders []border

func (b borders) Len() int { return len(b) }

func (b borders) Less(i, k int) bool {
	return b[i].cost < b[k].cost || b[i].cost == b[k].cost && b[i].block < b[k].block
}

func (b borders) Swap(i, k int) { b[i], b[k] = b[k], b[i] }

func (b *borders) Push(v any) { *b = append(*b, v.(border)) }

func (b *borders) Pop() any {
	last := (*b)[len(*b)-1]
	*b = (*b)[:len(*b)-1]
	return last
}

func newJoining(given []block) *joining {
	n := len(given)
	j := &joining{given: given, blocks: slices.Clone(given), before: make([]int, n), after: make([]int, n), stage: make([]int, n), cost: make([]float64, n)}
	for i := range given {
		j.before[i], j.after[i] = i-1, i+1
		j.price(i)
	}
	return j
}

// price puts the border after a block into the queue; what was there for it is void.
func (j *joining) price(i int) {
	j.cost[i] = math.NaN()
	if j.after[i] == len(j.blocks) {
		return
	}
	a, b := &j.blocks[i], &j.blocks[j.after[i]]
	both := a.joined(*b)
	j.cost[i] = both.misfit() - a.misfit() - b.misfit()
	heap.Push(&j.queue, border{j.cost[i], i})
}

// next joins the two blocks that cost least, and returns their cost.
func (j *joining) next(stage int) float64 {
	least := heap.Pop(&j.queue).(border)
	for least.cost != j.cost[least.block] {
		least = heap.Pop(&j.queue).(border)
	}
	i := least.block
	gone := j.after[i]
	j.blocks[i] = j.blocks[i].joined(j.blocks[gone])
	j.stage[gone], j.cost[gone], j.after[i] = stage, math.NaN(), j.after[gone]
	if j.after[i] < len(j.blocks) {
		j.before[j.after[i]] = i
	}
	j.price(i)
	if j.before[i] >= 0 {
		j.price(j.before[i])
	}
	return least.cost
}

// at returns the blocks as they were after a stage.
func (j *joining) at(stage int) []block {
	var blocks []block
	for i, b := range j.given {
		if last := len(blocks) - 1; j.stage[i] > 0 && j.stage[i] <= stage {
			blocks[last] = blocks[last].joined(b)
		} else {
			blocks = append(blocks, b)
		}
	}
	return blocks
}
