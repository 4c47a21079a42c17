# Question: does this program give the answers that handbooks, published benchmark sets and
# independent computations give, with the elements and solvers that jobs use?
# Expected: every value within the tolerance of its row; the report lists them all.

job "verify" {
  about = "Beams, plates, laminates, shells and harmonic response against known answers"
}

setting "rows" {
  value = []
  about = "beginnings of the ids of the rows to solve; all when empty"
}

stage "verify" "known" {
  tables = [
    "../../testdata/known/A_beams.json",
    "../../testdata/known/B_plates.json",
    "../../testdata/known/C_shells.json",
    "../../testdata/known/D_harmonic.json",
  ]
  rows = setting.rows
}

requirement "within-tolerance" {
  figure  = stage.known.figures.failed
  equals  = 0
  because = "a value beyond its tolerance means that results cannot be trusted"
}

stage "report" "page" {
  include = [stage.known.verification]
  to      = "report/verify.html"
}
