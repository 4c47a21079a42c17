package main

import (
	"context"
	"fmt"
	"os"

	"hushframe/jobs/inprocess"
)

func main() {
	d, err := inprocess.Run(context.Background(), os.Args[1], os.Args[2], nil)
	if err != nil {
		fmt.Println("ERR", err)
		os.Exit(1)
	}
	for _, s := range d.Result.Steps {
		fmt.Println("==", s.Label, s.State, s.Elapsed)
		for _, n := range s.Outcome.Notes {
			fmt.Println("  note:", n)
		}
		for _, w := range s.Outcome.Warnings {
			fmt.Println("  WARN:", w)
		}
		for _, t := range s.Outcome.Summary {
			fmt.Println("  #", t.Title, t.Text)
			for _, c := range t.Columns {
				fmt.Print("  | ", c.Name)
			}
			fmt.Println()
			for _, r := range t.Rows {
				fmt.Println("   ", r)
			}
		}
	}
	for _, v := range d.Result.Verdicts {
		fmt.Println(v)
	}
}
