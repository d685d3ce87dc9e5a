package main

import (
	"errors"
	"strconv"
	"strings"
	"time"
)

// clock reads a time to come, the zero time if it is not given.
func (v *values) clock(flag string, now time.Time) time.Time {
	if !v.c.IsSet(flag) {
		return time.Time{}
	}
	t, err := nextClock(v.c.String(flag), now)
	if err != nil {
		v.fail(flag, v.c.String(flag), err.Error())
	}
	return t
}

// nextClock reads a time of day, the next such after now, or a whole date. The error is what is
// wanted.
func nextClock(text string, now time.Time) (time.Time, error) {
	t, err := time.Parse(time.RFC3339, text)
	if err == nil && !t.After(now) {
		return time.Time{}, errors.New("a time to come")
	}
	if err == nil {
		return t, nil
	}
	t, err = time.ParseInLocation("15:04", text, now.Location())
	if err != nil {
		return time.Time{}, errors.New("a time such as 07:00 or 2031-05-06T07:00:00Z")
	}
	t = time.Date(now.Year(), now.Month(), now.Day(), t.Hour(), t.Minute(), 0, 0, now.Location())
	if !t.After(now) {
		t = t.AddDate(0, 0, 1)
	}
	return t, nil
}

// part reads I/N, 0 and 0 if it is not given.
func (v *values) part(flag string) (i, n int) {
	if !v.c.IsSet(flag) {
		return 0, 0
	}
	first, second, _ := strings.Cut(v.c.String(flag), "/")
	i, err := strconv.Atoi(first)
	n, err2 := strconv.Atoi(second)
	if err != nil || err2 != nil || i < 1 || n < i {
		v.fail(flag, v.c.String(flag), "I/N with I from 1 to N, such as 2/5")
		return 0, 0
	}
	return i, n
}
