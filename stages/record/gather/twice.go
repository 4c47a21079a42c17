package gather

import (
	"context"
	"errors"
	"fmt"
	"math"

	"hushframe/core/extension"
	"hushframe/core/signal/recording"
)

// enoughTimes is how many rows tell what rate the times make.
const enoughTimes = 20000

var errEnough = errors.New("enough rows")

// twice tells of a rate that the job states where a column that is a time by its name makes another one. The times are not used
// then, and that may be meant: a clock that is coarser than the samples agrees over many rows, one with gaps from row to row, and
// neither is told.
func twice(ctx context.Context, reader extension.Reader, open source, h recording.Header, p Plan, set Settings) (recording.Finding, bool) {
	found := matching(h, func(w []string) string {
		if isTime(w) {
			return "time"
		}
		return ""
	})["time"]
	if set.Rate == 0 || p.Time != "" || len(found) != 1 {
		return recording.Finding{}, false
	}
	column := h.Columns[found[0]]
	in, err := open()
	if err != nil {
		return recording.Finding{}, false
	}
	var times []float64
	err = reader.Read(ctx, in, set.Options, recording.Request{Columns: []string{p.Axes[0].Column}, Time: column.Name, TimeUnit: 1}, func(b recording.Batch) error {
		for _, t := range b.Time {
			if !math.IsNaN(t) {
				times = append(times, t)
			}
		}
		if len(times) >= enoughTimes {
			return errEnough
		}
		return nil
	})
	if err != nil && !errors.Is(err, errEnough) || len(times) < 3 {
		return recording.Finding{}, false
	}
	step := medianStep(times)
	second := 0.0
	if unit, _ := unitOf(column, "time", set); unit != "" {
		if second, err = factor(unit, "time", column.Name); err != nil {
			return recording.Finding{}, false
		}
	} else if _, guessed, ok := guessTimeUnit(step); ok {
		second = guessed
	}
	usual, whole := 1/(step*second), float64(len(times)-1)/((times[len(times)-1]-times[0])*second)
	for _, rate := range []float64{usual, whole} {
		if !(rate > 0) || math.IsInf(rate, 0) || math.Abs(set.Rate/rate-1) <= rateTolerance {
			return recording.Finding{}, false
		}
	}
	return recording.Finding{What: "rate", Where: column.Name, Extent: fmt.Sprintf("the job states %.6g Hz, this column makes it %.6g Hz", set.Rate, usual),
		Consequence: "that of the job is believed; every frequency is wrong by that ratio if it is the other"}, true
}
