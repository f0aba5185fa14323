package geo

import (
	"math"
	"sync/atomic"
)

const (
	maxDepth    = 20      // of the tree; boxes as large as the survey have 2
	fewInDoubt  = 8       // cameras of a box that it is not divided for
	maxTreeSize = 8 << 20 // 4 bytes each, of all lists and boxes
	boxSize     = 32      // 4 bytes each
)

// cuboid is a part of space, its faces included. It may have no end.
type cuboid struct{ low, high [3]float64 }

// cameraTree divides space into boxes, each into eight, and lists the cameras that may
// see a point of a box.
type cameraTree struct {
	root   treeNode
	centre [3]float64   // where the whole of space is divided
	step   float64      // m, from there to the next planes
	size   atomic.Int64 // 4 bytes each
}

// treeNode is a box of the tree.
type treeNode struct {
	cuboid
	cameras []int32 // rising
	leaf    bool    // not to be divided
	depth   int8
	parts   atomic.Pointer[treeParts] // nil before it is divided
}

// treeParts are the eight boxes of a divided one; bit 0 of their number is set in those
// beyond the plane x = at[0], bits 1 and 2 for y and z.
type treeParts struct {
	at    [3]float64
	nodes [8]treeNode
}

// newCameraTree returns a tree that is not yet divided for n cameras, given the bounds
// of their centres.
func newCameraTree(r cameraRule, n int, low, high [3]float64) *cameraTree {
	t := &cameraTree{step: 1}
	for axis := range 3 {
		t.centre[axis] = low[axis] + (high[axis]-low[axis])/2
		t.step = max(t.step, high[axis]-low[axis])
		t.root.low[axis], t.root.high[axis] = math.Inf(-1), math.Inf(1)
	}
	t.root.cameras = make([]int32, n)
	for k := range t.root.cameras {
		t.root.cameras[k] = int32(k)
	}
	t.root.leaf = t.root.settled(r)
	return t
}

// bare returns the tree as it was before it was divided.
func (t *cameraTree) bare() *cameraTree {
	fresh := &cameraTree{centre: t.centre, step: t.step}
	fresh.root.cuboid, fresh.root.cameras, fresh.root.leaf = t.root.cuboid, t.root.cameras, t.root.leaf
	return fresh
}

// cameras returns the cameras that may see a point, after it has divided the boxes
// that the point is in.
func (t *cameraTree) cameras(r cameraRule, x, y, z float64) []int32 {
	n := &t.root
	for !n.leaf {
		p := n.parts.Load()
		if p == nil {
			p = t.divide(r, n)
		}
		k := 0
		if x >= p.at[0] {
			k = 1
		}
		if y >= p.at[1] {
			k |= 2
		}
		if z >= p.at[2] {
			k |= 4
		}
		n = &p.nodes[k]
	}
	return n.cameras
}

// divide divides a box, unless another goroutine has by then, and returns its parts.
func (t *cameraTree) divide(r cameraRule, n *treeNode) *treeParts {
	p := &treeParts{}
	for axis := range 3 {
		p.at[axis] = t.cut(axis, n.low[axis], n.high[axis])
	}
	size := len(p.nodes) * boxSize
	for k := range p.nodes {
		p.nodes[k].fill(r, n, k, &p.at)
		size += cap(p.nodes[k].cameras)
	}
	if !n.parts.CompareAndSwap(nil, p) {
		return n.parts.Load()
	}
	t.size.Add(int64(size))
	return p
}

// cut returns where a box is divided along an axis. Ends double their distance from the
// centre.
func (t *cameraTree) cut(axis int, low, high float64) float64 {
	c := t.centre[axis]
	switch open, endless := math.IsInf(low, -1), math.IsInf(high, 1); {
	case open && endless:
		return c
	case open:
		return c - max(t.step, 2*(c-high))
	case endless:
		return c + max(t.step, 2*(low-c))
	}
	return low + (high-low)/2
}

// fill makes part k of a box that is divided at three planes.
func (n *treeNode) fill(r cameraRule, whole *treeNode, k int, at *[3]float64) {
	n.cuboid, n.depth = whole.cuboid, whole.depth+1
	for axis := range 3 {
		if k>>axis&1 == 1 {
			n.low[axis] = at[axis]
		} else {
			n.high[axis] = at[axis]
		}
	}
	for _, camera := range whole.cameras {
		if r.reaches(camera, &n.cuboid) {
			n.cameras = append(n.cameras, camera)
		}
	}
	n.leaf = n.settled(r)
}

// settled tells whether dividing a box would gain little: few of its cameras are in
// doubt, or an eighth are not. The rule then decides on up to about twice the cameras
// that see a point; finer boxes would take more memory and no less time.
func (n *treeNode) settled(r cameraRule) bool {
	doubt := 0
	for _, camera := range n.cameras {
		if !r.covers(camera, &n.cuboid) {
			doubt++
		}
	}
	return n.depth == maxDepth || doubt <= max(fewInDoubt, len(n.cameras)*7/8)
}
