package solve

// Places gives tests the sites of a frame.
var Places = places
