package wave

// meeting is the crossing of two neighbouring fronts at x. It is void once either
// has ended or a front has come between them.
type meeting struct {
	x            float64
	lower, upper int32
}

func (m meeting) before(n meeting) bool {
	if m.x != n.x {
		return m.x < n.x
	}
	return m.lower < n.lower
}

// queue is a binary heap of meetings, earliest first; equal x in order of birth,
// so that a trace never depends on anything but its input.
type queue []meeting

func (q *queue) push(m meeting) {
	heap := append(*q, m)
	i := len(heap) - 1
	for i > 0 {
		parent := (i - 1) / 2
		if !heap[i].before(heap[parent]) {
			break
		}
		heap[i], heap[parent] = heap[parent], heap[i]
		i = parent
	}
	*q = heap
}

func (q *queue) pop() {
	heap := *q
	last := len(heap) - 1
	heap[0] = heap[last]
	heap = heap[:last]
	i := 0
	for {
		child := 2*i + 1
		if child >= last {
			break
		}
		if child+1 < last && heap[child+1].before(heap[child]) {
			child++
		}
		if !heap[child].before(heap[i]) {
			break
		}
		heap[i], heap[child] = heap[child], heap[i]
		i = child
	}
	*q = heap
}
