// Package migrations holds the numbered steps that build the data file's
// layout, one SQL file a step, named NUMBER_NAME.up.sql.
//
// A step that has been released is never edited: data files in use have
// already run it. A change of the layout is a new file with the next number.
package migrations

import "embed"

// Files holds the steps, in the order of their numbers.
//
//go:embed *.up.sql
var Files embed.FS
