package job_test

import (
	"testing"

	"hushframe/core/pipeline/stage"
)

// TestFunctions evaluates each function once in a job, so that its name, its
// arguments and its result are what the language promises.
func TestFunctions(t *testing.T) {
	for expression, want := range map[string]any{
		`number_in("2 cm", "mm")`:                                    20.0,
		`number_in("5 mm", "mm")`:                                    5.0,
		`number_in("33000 rpm", "turn/s")`:                           550.0,
		`quantity(2, "mm")`:                                          stage.Quantity{SI: 0.002, Dimension: "length"},
		`quantity(number_in("1 m", "mm") / 4, "mm")`:                 stage.Quantity{SI: 0.25, Dimension: "length"},
		`"${quantity(7.5, "mm")}."`:                                  "7.5 mm.",
		`"2 cm" == quantity(20, "mm")`:                               true,
		`"2 cm" > "1 mm"`:                                            true,
		`"2 cm" != "20 mm"`:                                          false,
		`"carbon" == "carbon"`:                                       true,
		`2 < 3 && 3 <= 3 && !(2 > 3) && 2 != 3`:                      true,
		`true ? "5 mm" : quantity(3, "mm")`:                          "5 mm",
		`abs(-2) + ceil(1.2) + floor(1.8) + round(2.5)`:              8.0,
		`sqrt(16) + pow(2, 3) + signum(-4)`:                          11.0,
		`log(8, 2) + exp(0) + cos(0) + sin(0)`:                       5.0,
		`min(3, 1, 2) + max([4, 5]...)`:                              6.0,
		`sum([1, 2, 3.5])`:                                           6.5,
		`sum([])`:                                                    0.0,
		`length(range(4)) + length("mm")`:                            nil, // a text has no length
		`length(concat([1], [2, 3]))`:                                3.0,
		`join("-", [for x in flatten([[1], [2, [3]]]) : x])`:         "1-2-3",
		`join(",", [for x in sort([10, 9, 2]) : x])`:                 "2,9,10",
		`join(",", sort(["b", "a"]))`:                                "a,b",
		`join(",", reverse(distinct(["a", "b", "a"])))`:              "b,a",
		`contains(["a", "b"], "b")`:                                  true,
		`element(["a", "b"], 3)`:                                     "b",
		`join(",", slice(["a", "b", "c"], 1, 3))`:                    "b,c",
		`join(",", keys({ b = 1, a = 2 }))`:                          "a,b",
		`sum(values({ b = 1, a = 2 }))`:                              3.0,
		`lookup({ a = 1 }, "b", 7)`:                                  7.0,
		`merge({ a = 1 }, { b = 2 })["b"]`:                           2.0,
		`zipmap(["a", "b"], [1, 2]).b`:                               2.0,
		`coalesce(null, "x")`:                                        "x",
		`all([true, 1 < 2]) && !any([false]) && all([]) && !any([])`: true,
		`all([true, false]) || any([])`:                              false,
		`any([false, true]) && all([true])`:                          true,
		`format("%03d-%.1f", 7, 2.25)`:                               "007-2.2",
		`join("", split(",", "a,b"))`:                                "ab",
		`"${lower("A")}${upper("b")}${title("cd")}"`:                 "aBCd",
		`replace("a-b", "-", "_")`:                                   "a_b",
		`regex("[0-9]+", "hover-03")`:                                "03",
		`length(regex_all("[a-z]", "a1b"))`:                          2.0,
		`regex_replace("a1b2", "[0-9]", "")`:                         "ab",
		`substr("hover", 1, 3)`:                                      "ove",
		`"${trim("-a-", "-")}${trim_space(" b ")}${trim_prefix("xc", "x")}${trim_suffix("dx", "x")}"`: "abcd",
		`tonumber("2.5")`:                      2.5,
		`tostring(quantity(7.5, "mm"))`:        "7.5 mm",
		`"${quantity(7.5, "mm")}"`:             stage.Quantity{SI: 0.0075, Dimension: "length"},
		`tostring(2.5)`:                        "2.5",
		`try(tonumber("x"), 1)`:                1.0,
		`can(tonumber("x"))`:                   false,
		`path("flights", "..", "cut/arm.dxf")`: "cut/arm.dxf",
		`path("a", "")`:                        nil,
		`sqrt(-1)`:                             nil,
		`number_in("2 mm", "g")`:               nil,
		`"2 mm" < 3`:                           nil,
	} {
		j, text := load(t, head+"stage \"import\" \"x\" {\n airframe = \"airframe.hcl\"\n with = { x = "+expression+" }\n}\n", nil)
		if want == nil {
			if text == "" {
				t.Errorf("%s is accepted", expression)
			}
			continue
		}
		if text != "" {
			t.Errorf("%s: %s", expression, text)
			continue
		}
		args, _, _ := find(t, j, "x").Evaluate(nil)
		if got := args.Map("with")["x"]; got != want {
			t.Errorf("%s is %v, not %v", expression, got, want)
		}
	}
}
