package briefing_test

import (
	"fmt"

	"swardbook/bot/reply"
)

// asText is a block as plain words, for looking things up in.
func asText(block reply.Block) string {
	switch b := block.(type) {
	case reply.Heading:
		return string(b)
	case reply.Text:
		return string(b)
	default:
		return fmt.Sprint(b)
	}
}
