// Package front holds the moving part of the report page: TypeScript in src, bundled with the packages it uses into
// bundle/page.js, which is committed. `go generate ./stages/report/front` makes it anew (with npm and a network); no
// other build needs either.
package front

import _ "embed"

//go:generate go run -C build .

// Script is the bundle. Nothing in it ends a script element.
//
//go:embed bundle/page.js
var Script string
