package report

// cautionSection says what a report like this cannot say, and what to mind.
func cautionSection() *section {
	s := &section{ID: "cautions", Title: "Cautions"}
	s.list([]string{
		"The prediction is small linear vibration of the frame about hover. It says nothing about crash strength, the stability of the flight controller or airworthiness.",
		"Material constants from the built-in table are typical values; the plates in hand may differ by their scatter, and so may every frequency that depends on them.",
		"The level of the response rests on assumed sources. In closed-loop flight the control loop shifts frequency and damping near its bandwidth.",
		"On the bench: propellers off unless the test needs them; then guards, eye protection and a frame that is tied down.",
		"Lithium batteries: never charge or store damaged packs; keep them away from clamps, screws and hot parts while testing.",
		"Local aviation rules and licensed practice decide whether, where and by whom an aircraft is flown; nothing on this page does.",
	})
	return s
}

// glossarySection explains the terms that the page uses, in the words of the
// trade (ISO 2041 for vibration, ISO 21940 for balance).
func glossarySection() *section {
	s := &section{ID: "glossary", Title: "Terms"}
	s.Blocks = append(s.Blocks, block{Terms: []term{
		{"mode", "a pattern in which every point of the frame moves at one common frequency, its natural frequency"},
		{"damping ratio", "actual over critical damping; half the loss factor for light damping"},
		{"loss factor", "energy lost in a cycle over 2π times the largest strain energy; here constant over frequency (hysteretic)"},
		{"gyro strength", "peak gyro rate per newton of one mode alone, root sum of squares over unit forces at every rotor hub"},
		{"roll, pitch, yaw", "rotation about the forward, left and up axis by the right hand; positive pitch is nose down"},
		{"power spectral density", "mean square per unit of bandwidth, one-sided, here of the gyro rate in (deg/s)²/Hz"},
		{"order", "a multiple of a rotor's speed; order 1 is unbalance, the number of blades is blade passing"},
		{"balance grade", "eccentricity times highest service speed in mm/s (ISO 21940-11), as in G6.3"},
		{"residual vectors", "shapes that carry the static answer of all modes that were left out"},
		{"stands out", "height of a peak over the higher of the two valleys beside it"},
		{"masked", "left out of the comparison because a rotor order may lie there"},
	}})
	return s
}
