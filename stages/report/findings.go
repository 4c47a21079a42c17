package report

import (
	"fmt"
	"strings"

	"hushframe/core/mechanics/modal"
	"hushframe/stages/kinds"
)

// findings says at the very top what rings, what the gyro feels, and where a change would act. All of it is in the
// artifacts; here it is put in words.
func findings(c *content) []term {
	var out []term
	add := func(word, meaning string) {
		if meaning != "" {
			out = append(out, term{word, meaning})
		}
	}
	add("What rings", whatRings(c))
	add("What the gyro feels", whatIsFelt(c))
	add("Where rotors meet it", whatIsDriven(c))
	add("Where a change acts", whatToChange(c))
	add("What the flight said", whatWasFlown(c))
	return out
}

func whatRings(c *content) string {
	if c.modes == nil {
		return ""
	}
	s := c.modes.Survey
	n, first, last := 0, 0.0, 0.0
	for _, m := range s.Modes {
		if m.Frequency >= s.From && m.Frequency <= s.To {
			if n == 0 {
				first = m.Frequency
			}
			n, last = n+1, m.Frequency
		}
	}
	if n == 0 {
		return fmt.Sprintf("no mode between %.4g and %.4g Hz", s.From, s.To)
	}
	return fmt.Sprintf("%s between %.4g and %.4g Hz, from %.1f to %.1f Hz", joinCount(n, "mode", "modes"), s.From, s.To, first, last)
}

// strongestPeak gives the highest predicted peak of an axis.
func strongestPeak(r *kinds.Response, axis string) *kinds.ResponsePeak {
	var best *kinds.ResponsePeak
	for i := range r.Peaks {
		if p := &r.Peaks[i]; p.Axis == axis && (best == nil || p.Density > best.Density) {
			best = p
		}
	}
	return best
}

func whatIsFelt(c *content) string {
	if c.response == nil {
		return ""
	}
	var parts []string
	for _, axis := range kinds.AxisNames {
		if p := strongestPeak(c.response, axis); p != nil {
			text := fmt.Sprintf("%s most at %.1f Hz", axis, p.Frequency)
			if len(p.Modes) > 0 {
				text += fmt.Sprintf(" (mode %d)", p.Modes[0])
			}
			parts = append(parts, text)
		}
	}
	return strings.Join(parts, ", ")
}

// whatIsDriven names the modes that an order meets near hover.
func whatIsDriven(c *content) string {
	if c.modes == nil {
		return ""
	}
	s := c.modes.Survey
	met := map[string][]string{}
	for _, m := range s.Modes {
		if m.Frequency < s.From || m.Frequency > s.To {
			continue
		}
		for _, x := range m.Meetings {
			if x.Hover {
				name := fmt.Sprintf("order %d", x.Order)
				if x.Blade {
					name = "blade passing"
				}
				if list := met[name]; len(list) == 0 || list[len(list)-1] != fmt.Sprint(m.Number) {
					met[name] = append(list, fmt.Sprint(m.Number))
				}
			}
		}
	}
	var parts []string
	for _, name := range []string{"order 1", "order 2", "blade passing"} {
		if len(met[name]) == 1 {
			parts = append(parts, name+" meets mode "+met[name][0])
		} else if len(met[name]) > 1 {
			parts = append(parts, name+" meets modes "+strings.Join(met[name], ", "))
		}
	}
	if len(parts) == 0 {
		return fmt.Sprintf("no order meets a mode within %.0f %% of hover speed", 100*modal.HoverBand)
	}
	return fmt.Sprintf("within %.0f %% of hover speed ", 100*modal.HoverBand) + strings.Join(parts, "; ")
}

// whatToChange says where the loudest peak of each axis bends the frame and what takes its power.
func whatToChange(c *content) string {
	if c.response == nil || c.modes == nil {
		return ""
	}
	var parts []string
	seen := map[int]bool{}
	for _, axis := range kinds.AxisNames {
		p := strongestPeak(c.response, axis)
		if p == nil || len(p.Modes) == 0 || seen[p.Modes[0]] {
			continue
		}
		seen[p.Modes[0]] = true
		for _, m := range c.modes.Survey.Modes {
			if m.Number != p.Modes[0] {
				continue
			}
			text := fmt.Sprintf("mode %d works in %s of %s", m.Number, m.Motion, strings.Join(m.Leading(c.modes.Basis.Groups), ", "))
			if len(p.Losses) > 0 && p.LossShares[0] > 0 {
				text += fmt.Sprintf("; %s takes %.0f %% of its power", strings.TrimPrefix(p.Losses[0], "part "), 100*p.LossShares[0])
			}
			parts = append(parts, text)
		}
	}
	if len(parts) == 0 {
		return ""
	}
	return "stiffness or damping there moves the peak most: " + strings.Join(parts, ". ")
}

func whatWasFlown(c *content) string {
	x := c.comparison
	if x == nil {
		return ""
	}
	if len(x.Pairs) == 0 {
		return "no recorded peak goes with a predicted one"
	}
	low, high := x.Pairs[0].Error, x.Pairs[0].Error
	for _, p := range x.Pairs {
		low, high = min(low, p.Error), max(high, p.Error)
	}
	return sign(fmt.Sprintf("%s found again; predicted over recorded frequency is off by %+.1f to %+.1f %%", joinCount(len(x.Pairs), "predicted peak", "predicted peaks"), 100*low, 100*high))
}
