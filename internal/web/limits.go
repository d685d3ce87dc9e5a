package web

import "time"

const (
	// maxBody is above the largest input file that is taken.
	maxBody = 1 << 20
	// maxHeader bounds addresses and headers.
	maxHeader = 16 << 10
	// maxItems is how many results are listed; more are left out and the page says so.
	maxItems = 5000
	// maxDepth is how many folders deep results are looked for.
	maxDepth = 3
	// maxOverlay is how many runs one figure may show: more cannot be told apart.
	maxOverlay = 12
	// maxStreams is how many pages may watch at once.
	maxStreams = 16
	// watchEvery is how often folders are looked at for news.
	watchEvery = time.Second
	// headerTime is how long a client may take to send a request.
	headerTime = 10 * time.Second
	// maxInvites is how many unused tokens there may be.
	maxInvites = 16
)
