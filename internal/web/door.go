package web

import (
	"crypto/rand"
	"crypto/subtle"
	"encoding/hex"
	"fmt"
	"strings"
	"sync"
)

// door knows who may come in.
type door struct {
	mu      sync.Mutex
	invites []string // tokens that work once
	keys    []string // of pages that are in
}

func newDoor() *door { return &door{} }

// secret is 256 random bits.
func secret() (string, error) {
	b := make([]byte, 32)
	if _, err := rand.Read(b); err != nil {
		return "", fmt.Errorf("no random numbers for a token: %w", err)
	}
	return hex.EncodeToString(b), nil
}

// invite makes a token. The oldest unused one gives way when there are too many.
func (d *door) invite() (string, error) {
	token, err := secret()
	if err != nil {
		return "", err
	}
	d.mu.Lock()
	defer d.mu.Unlock()
	d.invites = append(d.invites, token)
	if len(d.invites) > maxInvites {
		d.invites = d.invites[1:]
	}
	return token, nil
}

// enter trades a token for a key; the token is gone then.
func (d *door) enter(token string) (string, bool, error) {
	key, err := secret()
	if err != nil {
		return "", false, err
	}
	d.mu.Lock()
	defer d.mu.Unlock()
	for i, t := range d.invites {
		if same(t, token) {
			d.invites = append(d.invites[:i:i], d.invites[i+1:]...)
			d.keys = append(d.keys, key)
			return key, true, nil
		}
	}
	return "", false, nil
}

// knows tells whether an Authorization header holds a key.
func (d *door) knows(header string) bool {
	key, ok := strings.CutPrefix(header, "Bearer ")
	if !ok {
		return false
	}
	d.mu.Lock()
	defer d.mu.Unlock()
	found := false
	for _, k := range d.keys {
		if same(k, key) {
			found = true
		}
	}
	return found
}

// same compares in a time that tells nothing about where they differ.
func same(a, b string) bool { return subtle.ConstantTimeCompare([]byte(a), []byte(b)) == 1 }
