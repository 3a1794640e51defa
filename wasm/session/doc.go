// Package session holds what the page and its worker say to each other, the view that a link carries, and how gestures
// move the camera. It is plain Go: what runs in the browser is tested here.
//
// A message is a line of JSON, with the protocol's version first, and where needed a block of bytes beside it. The page
// sends requests; an answer carries the request's id. What the worker tells unasked carries the name of an event.
package session
