package serve

import (
	"bufio"
	"crypto/tls"
	"crypto/x509"
	"encoding/base64"
	"errors"
	"fmt"
	"os"
	"strings"

	"hushframe/plugins/wire"
)

// provideTLS makes the identity of this process and arranges for the handshake
// line to carry its certificate.
func provideTLS() (*tls.Config, error) {
	host := x509.NewCertPool()
	if !host.AppendCertsFromPEM([]byte(os.Getenv(wire.HostCertificateEnv))) {
		return nil, errors.New("the host sent no certificate in " + wire.HostCertificateEnv)
	}
	certificate, config, err := wire.NewIdentity()
	if err != nil {
		return nil, err
	}
	config.ClientCAs, config.RootCAs = host, host
	return config, announce(certificate)
}

// announce adds the certificate to the handshake line. go-plugin leaves it out
// for certificates that it did not make, so the line takes a way round.
func announce(certificate []byte) error {
	out := os.Stdout
	r, w, err := os.Pipe()
	if err != nil {
		return err
	}
	os.Stdout = w
	go func() {
		line, err := bufio.NewReader(r).ReadString('\n')
		if err == nil {
			line = strings.TrimSuffix(line, "\n") + base64.RawStdEncoding.EncodeToString(certificate) + "\n"
		}
		fmt.Fprint(out, line)
		r.Close()
	}()
	return nil
}
