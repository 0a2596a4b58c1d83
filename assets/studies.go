package assets

import "embed"

// Studies holds the example studies: studies/NAME.bandstudy. The title of each
// is the question it answers.
//
//go:embed studies
var Studies embed.FS
