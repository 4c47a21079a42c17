package main

import (
	"hushframe/core/extension"
	"hushframe/plugins/serve"
)

func main() {
	serve.Main(offer)
}

var offer = serve.Offer{Version: "1.0.0", Elements: []extension.Element{Wedge{}}}
