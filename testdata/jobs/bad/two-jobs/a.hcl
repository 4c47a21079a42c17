job "a" {}
