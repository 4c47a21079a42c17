package wire

import (
	"crypto/ecdsa"
	"crypto/elliptic"
	"crypto/rand"
	"crypto/tls"
	"crypto/x509"
	"crypto/x509/pkix"
	"math/big"
	"time"
)

// HostCertificateEnv holds the certificate of the host, PEM.
const HostCertificateEnv = "PLUGIN_CLIENT_CERT"

// NewIdentity makes a certificate (DER) for one end of one connection, and the TLS
// configuration that goes with it. Each end trusts nothing but the certificate
// of the other, which comes by the environment and by the handshake line.
//
// The scheme is that of go-plugin's automatic mutual TLS except for the curve:
// that one uses P-521, which the gRPC of other languages does not accept, and
// which takes a hundred times as long.
func NewIdentity() (der []byte, config *tls.Config, err error) {
	key, err := ecdsa.GenerateKey(elliptic.P256(), rand.Reader)
	if err != nil {
		return nil, nil, err
	}
	serial, err := rand.Int(rand.Reader, new(big.Int).Lsh(big.NewInt(1), 127))
	if err != nil {
		return nil, nil, err
	}
	const name = "localhost" // what go-plugin's peers expect
	template := &x509.Certificate{
		Subject:               pkix.Name{CommonName: name},
		DNSNames:              []string{name},
		SerialNumber:          serial,
		NotBefore:             time.Now().Add(-time.Hour), // clocks step
		NotAfter:              time.Now().AddDate(1, 0, 0),
		KeyUsage:              x509.KeyUsageDigitalSignature | x509.KeyUsageCertSign,
		ExtKeyUsage:           []x509.ExtKeyUsage{x509.ExtKeyUsageClientAuth, x509.ExtKeyUsageServerAuth},
		BasicConstraintsValid: true,
		IsCA:                  true,
	}
	der, err = x509.CreateCertificate(rand.Reader, template, template, key.Public(), key)
	if err != nil {
		return nil, nil, err
	}
	return der, &tls.Config{
		Certificates: []tls.Certificate{{Certificate: [][]byte{der}, PrivateKey: key}},
		ClientAuth:   tls.RequireAndVerifyClientCert,
		MinVersion:   tls.VersionTLS12,
		ServerName:   name,
	}, nil
}
