setting "a" { value = 1 }
