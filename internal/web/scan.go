package web

import (
	"net/http"
	"strconv"
	"strings"

	"ionfall/internal/report"
)

// scanView is the table of a scan, with the way to the results of its points.
type scanView struct {
	ID string `json:"id"`
	*report.Scan
}

func (s *Server) scan(r *http.Request) (any, error) {
	item, err := s.catalog.find(r.URL.Query().Get("id"))
	if err != nil {
		return nil, err
	}
	if item.Kind != kindScan {
		return nil, &requestError{http.StatusBadRequest, item.ID + " is no scan"}
	}
	scan, err := report.OpenScan(item.dir)
	if err != nil {
		return nil, err
	}
	folders := map[int64]string{}
	for _, id := range pointsOf(item) {
		_, number, _ := strings.Cut(id[strings.LastIndex(id, "/")+1:], "=")
		if n, err := strconv.ParseInt(number, 10, 64); err == nil {
			folders[n] = id
		}
	}
	for i := range scan.Points {
		scan.Points[i].ID = folders[scan.Points[i].Number]
	}
	return scanView{item.ID, scan}, nil
}
