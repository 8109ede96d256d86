package discord

import (
	"time"

	"github.com/prometheus/client_golang/prometheus"

	"swardbook/planner"
)

// Metrics are the bot's counters. A nil *Metrics counts nothing.
type Metrics struct {
	interactions *prometheus.CounterVec
	answer       prometheus.Histogram
	posts        *prometheus.CounterVec
	connects     prometheus.Counter
	connected    prometheus.Gauge
	panics       prometheus.Counter
}

// NewMetrics registers the bot's counters.
func NewMetrics(registry prometheus.Registerer) (*Metrics, error) {
	m := &Metrics{
		interactions: prometheus.NewCounterVec(prometheus.CounterOpts{Name: "swardbook_interactions_total", Help: "Commands, taps, completions and forms, by kind and outcome."}, []string{"kind", "outcome"}),
		answer: prometheus.NewHistogram(prometheus.HistogramOpts{Name: "swardbook_first_answer_seconds", Help: "From an interaction's arrival to its first answer.",
			Buckets: []float64{0.01, 0.03, 0.1, 0.3, 1, 2, 3}}),
		posts:     prometheus.NewCounterVec(prometheus.CounterOpts{Name: "swardbook_posts_total", Help: "Posts that came to an end, by state."}, []string{"state"}),
		connects:  prometheus.NewCounter(prometheus.CounterOpts{Name: "swardbook_gateway_connects_total", Help: "Connections to the gateway that were tried."}),
		connected: prometheus.NewGauge(prometheus.GaugeOpts{Name: "swardbook_gateway_connected", Help: "1 while the gateway is connected."}),
		panics:    prometheus.NewCounter(prometheus.CounterOpts{Name: "swardbook_panics_total", Help: "Handlers that panicked."}),
	}
	for _, one := range []prometheus.Collector{m.interactions, m.answer, m.posts, m.connects, m.connected, m.panics} {
		if err := registry.Register(one); err != nil {
			return nil, err
		}
	}
	return m, nil
}

// Post counts a posting that came to an end.
func (m *Metrics) Post(state planner.PostingState) {
	if m != nil {
		m.posts.WithLabelValues(string(state)).Inc()
	}
}

func (m *Metrics) interaction(kind, outcome string) {
	if m != nil {
		m.interactions.WithLabelValues(kind, outcome).Inc()
	}
}

func (m *Metrics) answered(after time.Duration) {
	if m != nil {
		m.answer.Observe(after.Seconds())
	}
}

func (m *Metrics) connecting() {
	if m != nil {
		m.connects.Inc()
	}
}

func (m *Metrics) setConnected(up bool) {
	if m == nil {
		return
	}
	m.connected.Set(0)
	if up {
		m.connected.Set(1)
	}
}

func (m *Metrics) panicked() {
	if m != nil {
		m.panics.Inc()
	}
}
