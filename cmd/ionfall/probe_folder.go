package main

import (
	"errors"

	"ionfall/internal/store"
)

// joinClose gives a folder up.
func joinClose(err error, folder *store.Run) error {
	return errors.Join(err, folder.Close())
}
