// Package web shows a run to browsers: the server, the hub that takes what the run publishes, the
// plots and the messages that carry their numbers.
//
// It knows HTTP, browsers and how much a plot can show. It may not know how a number is computed.
//
// A page opens one WebSocket. The first message describes the run and its plots, the later ones carry
// numbers; all are JSON objects with a "type". See message.go for what is sent and request.go for
// what a page may ask.
package web
