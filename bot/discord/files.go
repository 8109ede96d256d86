package discord

import (
	"net/url"
	"strings"

	"swardbook/planner"
)

// fileHosts are the service's own, from its documentation.
var fileHosts = map[string]bool{"cdn.discordapp.com": true, "media.discordapp.net": true}

// fromFileHost refuses an address that is not, to the letter, one of the
// service's file hosts.
func fromFileHost(address string) error {
	at, err := url.Parse(address)
	if err != nil || at.Scheme != "https" || at.User != nil || !fileHosts[at.Host] {
		return planner.Problemf(planner.Refused, "The file is not on the chat service's own file host.").
			WithHint("Attach it to the command.").WithCause(err)
	}
	return nil
}

// readable says whether content of the sniffed kind can be a station file (text)
// or a sheet (a zip).
func readable(kind string) bool {
	return strings.HasPrefix(kind, "text/plain") || kind == "application/zip"
}

// fileLabel is the user's name of a file made fit to be told and kept. It is
// never a path.
func fileLabel(name string) string {
	name = name[strings.LastIndexAny(name, `/\`)+1:]
	name = strings.Map(func(r rune) rune {
		if r < ' ' || r == '"' || r == 0x7f {
			return '-'
		}
		return r
	}, strings.ToValidUTF8(name, "-"))
	if runes := []rune(name); len(runes) > 100 {
		name = string(runes[len(runes)-100:])
	}
	if strings.TrimSpace(name) == "" {
		return "file"
	}
	return name
}
