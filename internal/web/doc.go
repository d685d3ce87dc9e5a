// Package web is the local viewer: it shows results folders in a browser on the same machine and
// watches those that are still running. It reads what is in the folders, never a simulation.
//
// # Who may see it
//
// The server listens on 127.0.0.1 only, on a free port. The address that it prints ends in a
// one-time token behind "#", which browsers keep to themselves; the page trades it once for a key
// that it sends with every request in a header. There are no cookies, so no other page can use
// the visitor's standing, and a key in a header cannot come from a form. On top of that
// every request must name this host (against names that are bound to 127.0.0.1 afterwards), must
// not come from another site, and is limited in size and time. Results are found by names from a
// list that the server makes; no path comes from a request.
//
// The page's content security policy allows its own files and nothing else.
package web
