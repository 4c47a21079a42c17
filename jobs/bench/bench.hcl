# Question: where does the arm ring on the bench, clamped at its root, and how well is it damped?
# A hammer with a force sensor strikes the tip seven times, an accelerometer listens there.
# Expected: 148.6 Hz with 1.4 % and 391.2 Hz with 2.1 % of damping (within 0.3 % and a
# tenth), six blows averaged, the fourth left out because it bounced.

job "bench" {
  about = "Hammer test of one arm, clamped at its root"
}

stage "transfer" "arm" {
  file    = "arm.csv.gz"
  columns = { time = "time_us", force = "hammer_N", z = "tip_accel_z_g" }
}

stage "report" "page" {
  include = [stage.arm.transfer]
  to      = "report/bench.html"
}

requirement "blows-enough" {
  figure   = stage.arm.figures.averages
  at_least = 5
  because  = "the coherence of few blows says little"
}

requirement "coherent" {
  figure   = stage.arm.figures.coherence
  at_least = 0.95
  because  = "a peak that the force does not explain is none of the arm"
}
