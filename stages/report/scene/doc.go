// Package scene packs what the moving part of a report page needs: the frame as it is drawn, the shapes of its
// modes, and the series of its charts. It computes nothing; it leaves out what cannot be seen.
//
// Text and short lists travel as JSON, long ones as base64 of little-endian numbers (Floats, Indices, Steps), which a
// browser turns into typed arrays without parsing. Units are those of the page: Hz, m for places, (deg/s)²/Hz for
// densities, rpm for rotor speed. The front end (stages/report/front) declares the same shapes in src/data.ts.
package scene
