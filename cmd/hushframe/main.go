package main

import (
	_ "github.com/apache/arrow-go/v18/arrow"
	_ "github.com/apache/arrow-go/v18/arrow/ipc"
	_ "github.com/gofrs/flock"
	_ "github.com/hashicorp/go-plugin"
	_ "github.com/hashicorp/hcl/v2"
	_ "github.com/hashicorp/hcl/v2/hclsyntax"
	_ "github.com/jedib0t/go-pretty/v6/table"
	_ "github.com/mattn/go-isatty"
	_ "github.com/rs/zerolog"
	_ "github.com/spf13/cobra"
	_ "github.com/vbauerster/mpb/v8"
	_ "github.com/zclconf/go-cty/cty"
	_ "gonum.org/v1/gonum/mat"
	_ "gonum.org/v1/plot"
	_ "google.golang.org/grpc"
	_ "google.golang.org/protobuf/proto"
	_ "golang.org/x/sync/errgroup"
)

func main() {}
