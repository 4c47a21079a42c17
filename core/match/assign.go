package match

import "math"

// Assign pairs rows with columns at least total cost. cost is row-major, rows × columns; an entry that is infinite or not
// a number forbids the pair. A row without a column costs cut, so a pair is made only where that lowers the total. It
// returns the column of each row, -1 for none. Equal costs are settled alike on every run. It panics if the length of
// cost is not rows·columns or cut is not finite.
//
// The work grows as rows²·(rows+columns).
func Assign(cost []float64, rows, columns int, cut float64) []int {
	if rows < 0 || columns < 0 || len(cost) != rows*columns {
		panic("match: the cost table is not rows by columns")
	}
	if math.IsNaN(cut) || math.IsInf(cut, 0) {
		panic("match: the cut must be finite")
	}
	// Every row has a column of its own beyond the real ones, at the cut; so every row finds a column.
	all := columns + rows
	at := func(i, j int) float64 {
		switch {
		case j >= columns && j-columns == i:
			return cut
		case j >= columns:
			return math.Inf(1)
		}
		if v := cost[i*columns+j]; !math.IsNaN(v) {
			return v
		}
		return math.Inf(1)
	}
	rowPrice, columnPrice := make([]float64, rows), make([]float64, all)
	holder := make([]int, all) // row that holds a column, -1 for none
	for j := range holder {
		holder[j] = -1
	}
	shortest, from, done := make([]float64, all), make([]int, all), make([]bool, all)
	for row := range rows {
		for j := range all {
			shortest[j], from[j], done[j] = math.Inf(1), -1, false
		}
		// Dijkstra over columns from the new row, with the reduced costs, until a free column is nearest.
		i, reached, end := row, 0.0, -1
		var tree []int
		for end < 0 {
			next := -1
			for j := range all {
				if done[j] {
					continue
				}
				if d := reached + at(i, j) - rowPrice[i] - columnPrice[j]; d < shortest[j] {
					shortest[j], from[j] = d, i
				}
				if next < 0 || shortest[j] < shortest[next] {
					next = j
				}
			}
			reached, done[next] = shortest[next], true
			if holder[next] < 0 {
				end = next
			} else {
				i = holder[next]
				tree = append(tree, next)
			}
		}
		// Prices keep reduced costs from going negative.
		rowPrice[row] += reached
		for _, j := range tree {
			rowPrice[holder[j]] += reached - shortest[j]
			columnPrice[j] -= reached - shortest[j]
		}
		// Turn the path round.
		for j := end; ; {
			i := from[j]
			before := columnOf(holder, i)
			holder[j] = i
			if i == row {
				break
			}
			j = before
		}
	}
	out := make([]int, rows)
	for i := range out {
		out[i] = -1
	}
	for j, i := range holder[:columns] {
		if i >= 0 {
			out[i] = j
		}
	}
	return out
}

func columnOf(holder []int, row int) int {
	for j, i := range holder {
		if i == row {
			return j
		}
	}
	return -1
}
