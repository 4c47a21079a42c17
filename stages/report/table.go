package report

import (
	"bytes"
	"encoding/csv"
	"fmt"
	"math"
	"strconv"
	"strings"
)

// table is shown on the page and written as comma-separated values.
type table struct {
	Name    string // of its file, without folder and ending
	Title   string
	About   string
	Columns []column
	Rows    [][]cell
	File    string // path beside the page, filled in when the page is made
}

// mostShown is how many rows of a table stand on the page; its file has all of them.
const mostShown = 400

// Shown gives the rows that stand on the page.
func (t *table) Shown() [][]cell { return t.Rows[:min(len(t.Rows), mostShown)] }

// More says what the page leaves out.
func (t *table) More() string {
	if len(t.Rows) <= mostShown {
		return ""
	}
	return fmt.Sprintf("The first %d of %d rows; the file has all.", mostShown, len(t.Rows))
}

type column struct {
	Name, Unit string
	Right      bool
}

// cell is shown as Text; Raw goes to the file. Strong and Quiet set it apart,
// and never say what Text does not.
type cell struct {
	Text, Raw     string
	Strong, Quiet bool
	Mono          bool // in letters of equal width
}

// Heading is the name with its unit, as it stands in the file.
func (c column) Heading() string {
	if c.Unit == "" {
		return c.Name
	}
	return c.Name + " [" + c.Unit + "]"
}

func words(s string) cell { return cell{Text: s, Raw: strings.ReplaceAll(s, "\u00a0", " ")} }

// number shows a value with a number of decimals and keeps nine digits in the
// file. NaN is a dash and an empty field.
func number(x float64, decimals int) cell {
	if math.IsNaN(x) {
		return missing()
	}
	text := sign(strconv.FormatFloat(x, 'f', decimals, 64))
	if strings.Trim(text, "−0.") == "" {
		text = strings.TrimPrefix(text, "−")
	}
	return cell{Text: text, Raw: strconv.FormatFloat(x, 'g', 9, 64)}
}

// digits shows a value with a number of significant digits.
func digits(x float64, n int) cell {
	if math.IsNaN(x) {
		return missing()
	}
	return cell{Text: significant(x, n), Raw: strconv.FormatFloat(x, 'g', 9, 64)}
}

// unless shows three digits, and zero for what is negligible; the file keeps it.
func unless(negligible bool, x float64) cell {
	c := digits(x, 3)
	if negligible {
		c.Text, c.Quiet = "0", true
	}
	return c
}

func missing() cell { return cell{Text: "–", Quiet: true} }

func count(n int) cell { return words(strconv.Itoa(n)) }

// significant writes digits plainly where that is short, with a power of ten
// otherwise.
func significant(x float64, n int) string {
	if x == 0 {
		return "0"
	}
	if math.IsInf(x, 0) {
		return sign(map[bool]string{true: "∞", false: "-∞"}[x > 0])
	}
	e := int(math.Floor(math.Log10(math.Abs(x)) + 1e-12))
	if e < -4 || e > 5 {
		s := strconv.FormatFloat(x, 'e', n-1, 64)
		mantissa, power, _ := strings.Cut(s, "e")
		p, _ := strconv.Atoi(power)
		return sign(mantissa) + "·10" + raised(p)
	}
	return sign(strconv.FormatFloat(x, 'f', max(0, n-1-e), 64))
}

func raised(p int) string {
	return strings.NewReplacer("-", "⁻", "0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴", "5", "⁵", "6", "⁶", "7", "⁷", "8", "⁸", "9", "⁹").Replace(strconv.Itoa(p))
}

// sign gives a negative number its proper minus.
func sign(s string) string { return strings.Replace(s, "-", "−", 1) }

// signed shows a difference with its sign; what rounds to zero has none.
func signed(x float64, decimals int) cell {
	c := number(x, decimals)
	if x > 0 && strings.Trim(c.Text, "0.") != "" {
		c.Text = "+" + c.Text
	}
	return c
}

// plain shows up to n significant digits, without trailing zeros.
func plain(x float64, n int) cell {
	if math.IsNaN(x) {
		return missing()
	}
	return cell{Text: sign(strconv.FormatFloat(x, 'g', n, 64)), Raw: strconv.FormatFloat(x, 'g', 9, 64)}
}

// csv writes the table. Fields that a spreadsheet would take for a formula are
// kept as text.
func (t *table) csv() []byte {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	head := make([]string, len(t.Columns))
	for i, c := range t.Columns {
		head[i] = c.Heading()
	}
	_ = w.Write(head) // a bytes.Buffer takes everything
	for _, row := range t.Rows {
		fields := make([]string, len(row))
		for i, c := range row {
			fields[i] = harmless(c.Raw)
		}
		_ = w.Write(fields)
	}
	w.Flush()
	return b.Bytes()
}

func harmless(s string) string {
	if s == "" || !strings.ContainsRune("=+-@\t\r", rune(s[0])) {
		return s
	}
	if _, err := strconv.ParseFloat(s, 64); err == nil {
		return s
	}
	return "'" + s
}

func percent(x float64, decimals int) cell { return number(100*x, decimals) }

// share writes a share with its name, to be kept on one line: "arm_fr 40 %".
func share(name string, x float64) string {
	return strings.ReplaceAll(fmt.Sprintf("%s %.0f %%", name, 100*x), " ", "\u00a0")
}

func joinCount(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}
