package topology

// keyed is an edge, by its lower half-edge, with the bits of a float64 that is not negative as its key.
type keyed struct {
	key  uint64
	half int32
}

// digitBits per pass: 2^11 counters stay in the first-level cache.
const digitBits = 11

// sortByKey sorts by key, equal keys in the order in which they come. The bits of floats that are not negative sort
// like the floats. It returns the sorted list, which may be another one than edges. (Radix sort from the lowest
// digit.)
func sortByKey(edges []keyed) []keyed {
	const buckets, mask = 1 << digitBits, 1<<digitBits - 1
	var count [(64 + digitBits - 1) / digitBits][buckets]int32
	for _, e := range edges {
		for d := range count {
			count[d][e.key>>(d*digitBits)&mask]++
		}
	}
	spare := make([]keyed, len(edges))
	for d := range count {
		if len(edges) > 0 && int(count[d][edges[0].key>>(d*digitBits)&mask]) == len(edges) {
			continue // all the same
		}
		sum := int32(0)
		for b := range count[d] {
			n := count[d][b]
			count[d][b] = sum
			sum += n
		}
		for _, e := range edges {
			at := &count[d][e.key>>(d*digitBits)&mask]
			spare[*at] = e
			*at++
		}
		edges, spare = spare, edges
	}
	return edges
}
