// Package validation holds the comparisons of the program's answers with published, exact or
// independently computed values.
//
// A test makes a Row of each comparison and keeps it with Record, one file of rows a section of
// the work; Markdown renders all of them as a page. Rows that fail are kept like the others.
package validation
