// Command go asks a running dewmark for the cycle in a file, by the client that oapi-codegen generates in the folder client,
// and prints the bytes of the answer. The request passes through the generated types, so that a member they lack fails.
package main

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"time"

	"dewmark/deploy/clients/go/client"
)

func main() {
	if err := run(os.Args[1:]); err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}

func run(args []string) error {
	if len(args) != 2 {
		return errors.New("usage: go ADDRESS FILE")
	}
	text, err := os.ReadFile(args[1])
	if err != nil {
		return err
	}
	var request client.CycleRequest
	strict := json.NewDecoder(bytes.NewReader(text))
	strict.DisallowUnknownFields()
	if err := strict.Decode(&request); err != nil {
		return err
	}
	c, err := client.NewClientWithResponses(args[0])
	if err != nil {
		return err
	}
	ctx, cancel := context.WithTimeout(context.Background(), 10*time.Second)
	defer cancel()
	answer, err := c.SolveCycleWithResponse(ctx, request)
	if err != nil {
		return err
	}
	if answer.JSON200 == nil {
		return fmt.Errorf("%s: %s", answer.Status(), answer.Body)
	}
	fmt.Fprintf(os.Stderr, "Go: %d states, COP %.3f\n", len(answer.JSON200.States), answer.JSON200.Performance.CopHeating)

	request.Evaporation.Temperature = new(200.0) // no propane is two-phase there
	refused, err := c.SolveCycleWithResponse(ctx, request)
	if err != nil {
		return err
	}
	if p := refused.ApplicationproblemJSON422; p == nil || p.Status != 422 {
		return fmt.Errorf("the refusal is not a problem document: %s: %s", refused.Status(), refused.Body)
	}
	_, err = os.Stdout.Write(answer.Body)
	return err
}
