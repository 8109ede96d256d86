// Package planner knows the nouns of the work (site, station, surface, work,
// entry, plan), turns a weather record and a work log into figures, and says
// when each piece of work falls due.
//
// It must not know where things are kept, what a chat server is, or what time
// it is now: the day comes in as a parameter, the record and the log come
// through the small interfaces declared here, and the central pair
//
//	Evaluate(plan) → figures
//	Apply(plan, edits) → plan
//
// is pure. Inside, temperatures are °C, amounts g/m², spans days.
package planner
