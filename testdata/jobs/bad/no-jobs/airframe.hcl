plate "p" {}
