// Package delimited reads recordings in delimited text, plain or compressed with gzip or zstd (told by content, not by name).
//
// Layout. A recording has any number of lines before its samples: free text, key and value pairs, comments, a line of
// names, a line of units. Samples begin at the first line with the usual number of fields in which the usual columns hold
// numbers. The names are the last line before it with as many fields; a comment counts if there is no other. A unit
// stands in brackets behind a name, or in a line of its own below the names.
//
// Separators are comma, semicolon, tab, bar and blanks; where none is stated, the one that finds most numbers in most
// lines is taken. Decimal commas are told from the same count. Quotes around a field are taken off. Empty fields, and
// NaN, null and NA, mean that a row has no sample of that column. Empty lines, and lines that begin with a comment mark (#, %
// or //), are skipped.
//
// Times keep their digits: the first time is taken off before anything is rounded to 64 bits.
package delimited
