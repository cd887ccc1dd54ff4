package main

import (
	"bytes"
	"crypto/tls"
	"errors"
	"os"
	"sync/atomic"
)

// certificate is a TLS certificate with its key, from files that are replaced when it is renewed.
type certificate struct {
	certFile, keyFile string
	cert, key         []byte // what the files held when they were read last
	current           atomic.Pointer[tls.Certificate]
}

func loadCertificate(certFile, keyFile string) (*certificate, error) {
	c := &certificate{certFile: certFile, keyFile: keyFile}
	if _, err := c.Reload(); err != nil {
		return nil, err
	}
	return c, nil
}

// Reload reads the files again and reports whether they have changed. After an error the certificate is that of before: two
// files are not replaced at the same moment, and the next look finds both.
func (c *certificate) Reload() (changed bool, err error) {
	cert, err := os.ReadFile(c.certFile)
	key, errKey := os.ReadFile(c.keyFile)
	if err = errors.Join(err, errKey); err != nil {
		return false, err
	}
	if c.current.Load() != nil && bytes.Equal(cert, c.cert) && bytes.Equal(key, c.key) {
		return false, nil
	}
	c.cert, c.key = cert, key // a faulty pair is told of once
	pair, err := tls.X509KeyPair(cert, key)
	if err != nil {
		return false, err
	}
	c.current.Store(&pair)
	return true, nil
}

// config serves the certificate that is current when a client connects. TLS 1.2 is the oldest version that is still sound.
func (c *certificate) config() *tls.Config {
	return &tls.Config{
		MinVersion:     tls.VersionTLS12,
		NextProtos:     []string{"h2", "http/1.1"},
		GetCertificate: func(*tls.ClientHelloInfo) (*tls.Certificate, error) { return c.current.Load(), nil },
	}
}
