package strictyaml

import "strings"

// Mark stands in a file in the place of a value that a person has still to fill in. No field accepts it, whatever its type: Bind
// reports each one, with what is wanted there, and nothing else about its place.
const Mark = "FILL-IN"

// MarkFound is what a problem says was found where the mark stands.
const MarkFound = "the mark " + Mark

// IsMark tells whether a text is the mark and nothing else; blanks around it do not count.
func IsMark(text string) bool { return strings.TrimSpace(text) == Mark }
