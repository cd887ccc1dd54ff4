package api

import (
	"bufio"
	"bytes"
	"crypto/rand"
	"crypto/sha256"
	"crypto/subtle"
	"encoding/base64"
	"encoding/hex"
	"errors"
	"fmt"
	"os"
	"regexp"
	"strings"
	"sync/atomic"
)

// Tokens are the bearer tokens of a file, one a line: the name of a client, a space and the SHA-256 of its token in
// hexadecimal. A client may have several lines, so that a new token works before the old one is taken out. Lines that are
// empty or begin with # say nothing. It is safe for concurrent use.
type Tokens struct {
	file string
	read []byte // what the file held when it was read last
	list atomic.Pointer[[]credential]
}

type credential struct {
	name string
	hash [sha256.Size]byte
}

// maxTokenFile is in bytes; a line has some 80.
const maxTokenFile = 1 << 20

var tokenName = regexp.MustCompile(`^[A-Za-z0-9._-]{1,64}$`)

// LoadTokens reads a file of tokens. One without any is an error: nobody could get in.
func LoadTokens(file string) (*Tokens, error) {
	t := &Tokens{file: file}
	if _, err := t.Reload(); err != nil {
		return nil, err
	}
	return t, nil
}

// Reload reads the file again and reports whether it has changed. After an error the tokens are those of before. It must
// not be called by two goroutines at once.
func (t *Tokens) Reload() (changed bool, err error) {
	text, err := os.ReadFile(t.file)
	if err != nil {
		return false, err
	}
	if t.list.Load() != nil && bytes.Equal(text, t.read) {
		return false, nil
	}
	t.read = text // a faulty file is told of once
	list, err := parseTokens(text)
	if err != nil {
		return false, fmt.Errorf("%s: %w", t.file, err)
	}
	t.list.Store(&list)
	return true, nil
}

func parseTokens(text []byte) ([]credential, error) {
	if len(text) > maxTokenFile {
		return nil, fmt.Errorf("%d bytes; allowed are %d", len(text), maxTokenFile)
	}
	var list []credential
	n := 0
	for lines := bufio.NewScanner(bytes.NewReader(text)); lines.Scan(); {
		n++
		line := strings.TrimSpace(lines.Text())
		if line == "" || line[0] == '#' {
			continue
		}
		fields := strings.Fields(line)
		if len(fields) != 2 || !tokenName.MatchString(fields[0]) {
			return nil, fmt.Errorf("line %d is not a name of letters, digits, dots, hyphens and underscores, 64 at most, and a hash", n)
		}
		one := credential{name: fields[0]}
		if k, err := hex.Decode(one.hash[:], []byte(fields[1][:min(len(fields[1]), 2*sha256.Size)])); err != nil || k != sha256.Size || len(fields[1]) != 2*sha256.Size {
			return nil, fmt.Errorf("line %d: the hash of %s is not SHA-256 in %d hexadecimal digits", n, fields[0], 2*sha256.Size)
		}
		list = append(list, one)
	}
	if len(list) == 0 {
		return nil, errors.New("there is no token")
	}
	return list, nil
}

// owner returns the name of the client that a token belongs to, "" for none. Its time does not tell how near a token
// comes to one that is valid.
func (t *Tokens) owner(presented string) string {
	hash := sha256.Sum256([]byte(presented))
	name := ""
	for _, one := range *t.list.Load() {
		if subtle.ConstantTimeCompare(hash[:], one.hash[:]) == 1 {
			name = one.name
		}
	}
	return name
}

// tokenPrefix makes a token that has leaked easy to find.
const tokenPrefix = "dewmark_"

// NewToken makes a token of 256 random bits for the client called name, and the line that stands for it in a file of
// tokens.
func NewToken(name string) (token, line string, err error) {
	if !tokenName.MatchString(name) {
		return "", "", fmt.Errorf("%q is no name; it has letters, digits, dots, hyphens and underscores, 64 at most", name)
	}
	var random [32]byte
	rand.Read(random[:])
	token = tokenPrefix + base64.RawURLEncoding.EncodeToString(random[:])
	hash := sha256.Sum256([]byte(token))
	return token, name + " " + hex.EncodeToString(hash[:]), nil
}
