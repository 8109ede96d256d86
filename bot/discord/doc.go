// Package discord is the chat server: commands and taps in, replies out, posts
// into channels.
//
// It must not know what any command does, and computes no figure. Everything
// that a reply needs in a chat stands in the reply; rights and sites are looked
// up anew at every use, and what comes from one server is answered from that
// server's team alone.
package discord
