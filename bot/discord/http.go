package discord

import (
	"bytes"
	"encoding/json"
	"io"
	"log/slog"
	"net/http"
	"net/url"
	"regexp"
	"strings"

	"github.com/bwmarrin/discordgo"
)

// moved sends what is meant for the service's hosts to another base.
type moved struct {
	to *url.URL
	by http.RoundTripper
}

// RoundTrip implements http.RoundTripper. The gateway's address, as the
// service answers it, is moved to the base too.
func (m moved) RoundTrip(r *http.Request) (*http.Response, error) {
	c := r.Clone(r.Context())
	c.URL.Scheme, c.URL.Host, c.Host = m.to.Scheme, m.to.Host, m.to.Host
	c.URL.Path = strings.TrimSuffix(m.to.Path, "/") + c.URL.Path
	resp, err := m.by.RoundTrip(c)
	if err != nil || resp.StatusCode != http.StatusOK || !strings.HasSuffix(r.URL.Path, "/gateway") {
		return resp, err
	}
	raw, err := io.ReadAll(io.LimitReader(resp.Body, 1<<16))
	_ = resp.Body.Close()
	if err != nil {
		return nil, err
	}
	var body struct {
		URL string `json:"url"`
	}
	if json.Unmarshal(raw, &body) == nil {
		if gateway, err := url.Parse(body.URL); err == nil {
			gateway.Scheme, gateway.Host = "ws"+strings.TrimPrefix(m.to.Scheme, "http"), m.to.Host
			body.URL = gateway.String()
			if moved, err := json.Marshal(body); err == nil {
				raw = moved
			}
		}
	}
	resp.Body, resp.ContentLength = io.NopCloser(bytes.NewReader(raw)), int64(len(raw))
	return resp, nil
}

// tokens are what must never be read in a log: the paths of interactions and
// webhooks hold tokens of their own.
var tokens = regexp.MustCompile(`((?:interactions|webhooks)/\d+/)[^/\s"?]+`)

// Redactor takes secrets out of all that is logged: as the ReplaceAttr of a
// slog handler it sees the message and every value.
func Redactor(token string) func([]string, slog.Attr) slog.Attr {
	clean := func(text string) string {
		if token != "" {
			text = strings.ReplaceAll(text, token, "[token]")
		}
		return tokens.ReplaceAllString(text, "${1}[token]")
	}
	return func(_ []string, attr slog.Attr) slog.Attr {
		switch value := attr.Value.Resolve(); value.Kind() {
		case slog.KindString:
			attr.Value = slog.StringValue(clean(value.String()))
		case slog.KindAny:
			if err, ok := value.Any().(error); ok {
				attr.Value = slog.StringValue(clean(err.Error()))
			} else {
				attr.Value = slog.StringValue(clean(value.String()))
			}
		}
		return attr
	}
}

// RouteLibraryLog sends what the client library logs to the log, which must
// redact. Call it once, before the first bot is made.
func RouteLibraryLog(log *slog.Logger) {
	discordgo.Logger = func(level, _ int, format string, _ ...any) {
		// The arguments may hold whole packets: the format says enough.
		log.Debug("chat library", "level", level, "says", strings.TrimSpace(format))
	}
}
