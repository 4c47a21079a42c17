job "bad" { about = setting.a }

setting "a" { value = 1 }
setting "b" { value = setting.a + 1 }
setting "c" { value = null }
setting "d" { value = stage.frame.figures.mass }
