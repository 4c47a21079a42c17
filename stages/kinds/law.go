package kinds

import (
	"hushframe/core/mechanics/airframe"
	"hushframe/core/pipeline/artifact"
)

// lawCols are the columns of how a stiffness depends on frequency.
func lawCols() []artifact.Column {
	return columns(
		col("law", artifact.Text, "", "how the stiffness depends on frequency: empty (not at all), table, fractional or solid"),
		col("law_reference", artifact.Float, "Hz", "frequency at which the stated stiffness holds"),
		col("law_frequency", artifact.FloatList, "Hz", "table: frequencies, ascending"),
		col("law_storage", artifact.FloatList, "1", "table: storage stiffness over the stated one"),
		col("law_loss", artifact.FloatList, "1", "table: loss factor"),
		col("law_order", artifact.Float, "1", "fractional: order of the derivative"),
		col("law_loss_factor", artifact.Float, "1", "fractional: loss factor at the reference; of a mount that of its component counts"),
		col("law_rise", artifact.Float, "1", "solid: stiffness at high frequency over that at rest"),
		col("law_peak", artifact.Float, "Hz", "solid: frequency of the greatest loss factor"),
	)
}

// lawFields is where columns meet fields, for both directions.
var lawFields = map[string]func(l *airframe.Law) *float64{
	"law_reference": func(l *airframe.Law) *float64 { return &l.Reference }, "law_order": func(l *airframe.Law) *float64 { return &l.Order },
	"law_loss_factor": func(l *airframe.Law) *float64 { return &l.LossFactor }, "law_rise": func(l *airframe.Law) *float64 { return &l.Rise },
	"law_peak": func(l *airframe.Law) *float64 { return &l.PeakAt },
}

var lawLists = map[string]func(l *airframe.Law) *[]float64{
	"law_frequency": func(l *airframe.Law) *[]float64 { return &l.Frequency }, "law_storage": func(l *airframe.Law) *[]float64 { return &l.Storage },
	"law_loss": func(l *airframe.Law) *[]float64 { return &l.Loss },
}

func setLaws(t *artifact.Table, n int, at func(i int) *airframe.Law) {
	t.Set("law", each(n, func(i int) string { return string(at(i).Kind) }))
	for name, field := range lawFields {
		t.Set(name, each(n, func(i int) float64 { return *field(at(i)) }))
	}
	for name, field := range lawLists {
		t.Set(name, each(n, func(i int) []float64 { return append([]float64{}, *field(at(i))...) }))
	}
}

// getLaw reads the law of a row, which must be possible.
func getLaw(t *artifact.Table, kind, owner string, i int) (airframe.Law, error) {
	l := airframe.Law{Kind: airframe.LawKind(t.Texts("law")[i])}
	for name, field := range lawFields {
		*field(&l) = t.Floats(name)[i]
	}
	for name, field := range lawLists {
		if list := t.FloatLists(name)[i]; len(list) > 0 {
			*field(&l) = list
		}
	}
	if err := l.Check(); err != nil {
		return l, malformed(kind, "the law of %s: %v", owner, err)
	}
	return l, nil
}
