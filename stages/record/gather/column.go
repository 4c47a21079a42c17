package gather

// chunk is the number of samples that a column grows by: growing never copies, so that a long recording leaves no litter.
const chunk = 1 << 16

// column gathers the samples of one column of a recording.
type column struct {
	full [][]float64
	last []float64
	n    int
}

func (c *column) add(v []float64) {
	for len(v) > 0 {
		if len(c.last) == cap(c.last) {
			if c.last != nil {
				c.full = append(c.full, c.last)
			}
			c.last = make([]float64, 0, chunk)
		}
		k := min(len(v), cap(c.last)-len(c.last))
		c.last = append(c.last, v[:k]...)
		c.n += k
		v = v[k:]
	}
}

// take gives all samples as one slice and empties the column.
func (c *column) take() []float64 {
	if len(c.full) == 0 {
		out := c.last
		*c = column{}
		return out
	}
	out := make([]float64, 0, c.n)
	for i, part := range c.full {
		out = append(out, part...)
		c.full[i] = nil
	}
	out = append(out, c.last...)
	*c = column{}
	return out
}
