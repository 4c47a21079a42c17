package gather

import (
	"slices"
	"strings"
	"unicode"
)

// words cuts a column name into lower-case words: at blanks and punctuation, where a capital follows a small letter, and
// between letters and digits. "scaledGyroX" gives scaled, gyro, x; "rpm_1" and "rpm1" give rpm, 1.
func words(name string) []string {
	var out []string
	var word []rune
	flush := func() {
		if len(word) > 0 {
			out = append(out, strings.ToLower(string(word)))
			word = word[:0]
		}
	}
	var last rune
	for _, r := range name {
		switch {
		case !unicode.IsLetter(r) && !unicode.IsDigit(r):
			flush()
			last = 0
			continue
		case unicode.IsUpper(r) && unicode.IsLower(last), unicode.IsDigit(r) != unicode.IsDigit(last) && last != 0:
			flush()
		}
		word = append(word, r)
		last = r
	}
	flush()
	return out
}

func has(words []string, any ...string) bool {
	return slices.ContainsFunc(any, func(w string) bool { return slices.Contains(words, w) })
}

// isTime tells whether a column is a time by its words.
func isTime(w []string) bool {
	return has(w, "time", "timestamp", "seconds", "clock") || len(w) > 0 && w[0] == "t" && len(w) <= 2
}

// rateAxis returns roll, pitch or yaw for a column of angular rate, "" for any other. Letters of axes are taken as those of
// the airframe.
func rateAxis(w []string) string {
	if isSetPoint(w) {
		return ""
	}
	if len(w) > 0 {
		switch w[0] {
		case "gx", "wx":
			return "roll"
		case "gy", "wy":
			return "pitch"
		case "gz", "wz":
			return "yaw"
		}
	}
	if !has(w, "gyro", "gyroscope", "rate", "omega") && !(has(w, "angular") && has(w, "velocity")) || has(w, "sample") {
		return ""
	}
	return axisWord(w, [3]string{"roll", "pitch", "yaw"})
}

// accelerationAxis returns x, y or z for a column of acceleration, "" for any other.
func accelerationAxis(w []string) string {
	if len(w) > 0 {
		switch w[0] {
		case "ax", "ay", "az":
			return w[0][1:]
		}
	}
	if !has(w, "accel", "acc", "acceleration", "accelerometer") {
		return ""
	}
	return axisWord(w, [3]string{"x", "y", "z"})
}

// axisWord finds the axis in the words and names it.
func axisWord(w []string, names [3]string) string {
	for i, letter := range [3]string{"x", "y", "z"} {
		if has(w, letter, [3]string{"roll", "pitch", "yaw"}[i]) {
			return names[i]
		}
	}
	return ""
}

// isSetPoint tells whether a column is what the control asks for, not what is measured.
func isSetPoint(w []string) bool {
	return has(w, "setpoint", "sp", "target", "command", "cmd", "desired", "demand", "reference") || has(w, "set") && has(w, "point")
}

// setPointAxis returns roll, pitch or yaw for a set-point of angular rate, "" for any other column.
func setPointAxis(w []string) string {
	if !isSetPoint(w) || has(w, "angle", "attitude", "position", "velocity", "accel", "acc", "acceleration") && !has(w, "rate", "gyro", "angular") {
		return ""
	}
	return axisWord(w, [3]string{"roll", "pitch", "yaw"})
}

// isThrottle tells whether a column is the throttle.
func isThrottle(w []string) bool { return has(w, "throttle", "thrust", "collective") }

// isElectrical tells whether a rotor speed is that of the field in the motor.
func isElectrical(w []string) bool {
	for i, word := range w {
		if word == "erpm" || word == "electrical" || word == "e" && i+1 < len(w) && w[i+1] == "rpm" {
			return true
		}
	}
	return false
}

// rotorName returns the name of the rotor whose speed a column holds; ok tells whether it holds one.
func rotorName(w []string) (name string, ok bool) {
	if isSetPoint(w) {
		return "", false
	}
	speed := has(w, "rpm", "erpm")
	if !speed && has(w, "rotor", "motor", "propeller", "prop") {
		speed = has(w, "speed", "hz", "rps", "rate")
	}
	if !speed {
		return "", false
	}
	var rest []string
	for _, word := range w {
		if !slices.Contains([]string{"rpm", "erpm", "e", "electrical", "rotor", "motor", "propeller", "prop", "speed", "hz", "rps", "rate", "rad", "rev", "s"}, word) {
			rest = append(rest, word)
		}
	}
	return strings.Join(rest, "_"), true
}
