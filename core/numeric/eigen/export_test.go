package eigen

import (
	"context"

	"hushframe/core/numeric/sparse"
)

// LowestCounted is Lowest with a spoiled count: what spoil makes of the true one and of whether it can be trusted.
func LowestCounted(ctx context.Context, k, m *sparse.Symmetric, order sparse.Ordering, opt Options, spoil func(count int, sure bool) (int, bool)) (*Result, error) {
	return lowest(ctx, k, m, order, opt, func(p *pencil, shift float64) (int, bool, error) {
		count, sure, err := p.count(shift)
		count, sure = spoil(count, sure)
		return count, sure, err
	})
}
