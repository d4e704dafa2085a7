package envelope

import "math"

// lattice is the grid of nodes on which a level is looked for: nx by ny nodes,
// node (i, j) at place (i, j), each cell cut in two by its rising diagonal.
type lattice struct {
	nx, ny int
	values []float64 // node (i, j) at i*ny + j; NaN where not defined
}

// The three edges that start at a node.
const (
	rightward = iota
	upward
	diagonal
	directions
)

func (g *lattice) node(i, j int) int        { return i*g.ny + j }
func (g *lattice) edge(i, j, along int) int { return directions*g.node(i, j) + along }
func (g *lattice) at(node int) place        { return place{float64(node / g.ny), float64(node % g.ny)} }
func (g *lattice) defined(node int) bool    { return !math.IsNaN(g.values[node]) }
func (g *lattice) crossed(ends [2]int) bool {
	return g.defined(ends[0]) && g.defined(ends[1]) && (g.values[ends[0]] >= 0) != (g.values[ends[1]] >= 0)
}

// ends are the two nodes of an edge; ok is false where it would leave the grid.
func (g *lattice) ends(edge int) (ends [2]int, ok bool) {
	node, along := edge/directions, edge%directions
	i, j := node/g.ny, node%g.ny
	if along != upward {
		i++
	}
	if along != rightward {
		j++
	}
	return [2]int{node, g.node(i, j)}, i < g.nx && j < g.ny
}

// whole reports whether the function is defined on all corners of the triangle
// around a place.
func (g *lattice) whole(p place) bool {
	i, j := min(int(p.x), g.nx-2), min(int(p.y), g.ny-2)
	third := g.node(i, j+1)
	if p.x-float64(i) >= p.y-float64(j) {
		third = g.node(i+1, j)
	}
	return g.defined(g.node(i, j)) && g.defined(g.node(i+1, j+1)) && g.defined(third)
}

// crossings lists the edges on which the function changes sign, in order.
func (g *lattice) crossings() []int {
	var list []int
	for edge := range directions * len(g.values) {
		if ends, ok := g.ends(edge); ok && g.crossed(ends) {
			list = append(list, edge)
		}
	}
	return list
}

// chain is a line as the edges it crosses, in order. A loop ends on its first edge.
// A loose end lies inside the map, where the function ceases to be defined.
type chain struct {
	edges                []int
	looseStart, looseEnd bool
}

// chains joins the edges that have a root through the triangles between them. A
// line has two ends on the border of the map or where the function is undefined,
// or none.
func (g *lattice) chains(rooted map[int]bool) []chain {
	links := map[int][]int{}
	loose := map[int]int{} // triangles beside an edge that lead on to nothing
	for i := range g.nx - 1 {
		for j := range g.ny - 1 {
			for _, triangle := range [2][3]int{
				{g.edge(i, j, rightward), g.edge(i+1, j, upward), g.edge(i, j, diagonal)},
				{g.edge(i, j, diagonal), g.edge(i, j+1, rightward), g.edge(i, j, upward)},
			} {
				var hit []int
				for _, edge := range triangle {
					if rooted[edge] {
						hit = append(hit, edge)
					}
				}
				switch len(hit) {
				case 1:
					loose[hit[0]]++
				case 2:
					links[hit[0]] = append(links[hit[0]], hit[1])
					links[hit[1]] = append(links[hit[1]], hit[0])
				}
			}
		}
	}
	var list []chain
	used := map[int]bool{}
	for _, onlyEnds := range [2]bool{true, false} {
		for edge := range directions * len(g.values) {
			if !rooted[edge] || used[edge] || onlyEnds && len(links[edge]) > 1 {
				continue
			}
			walked := walk(edge, links, used)
			last := walked[len(walked)-1]
			c := chain{edges: walked, looseStart: loose[edge] > 0, looseEnd: loose[last] > 0}
			if !onlyEnds {
				c.edges = append(c.edges, edge)
			}
			list = append(list, c)
		}
	}
	return list
}

// walk follows links from an edge to where they end.
func walk(edge int, links map[int][]int, used map[int]bool) []int {
	list := []int{edge}
	used[edge] = true
	for {
		next := -1
		for _, candidate := range links[edge] {
			if !used[candidate] {
				next = candidate
				break
			}
		}
		if next < 0 {
			return list
		}
		edge = next
		used[edge] = true
		list = append(list, edge)
	}
}
