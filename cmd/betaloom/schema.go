package main

import "betaloom/schema/sweep"

type schemaCommand struct{}

// Help shows the command by example.
func (schemaCommand) Help() string {
	return `Examples:

  betaloom schema > betaloom.schema.json

An editor with YAML support then completes and checks sweep files.`
}

// Run prints the JSON Schema of the sweep file.
func (schemaCommand) Run(con *console) error {
	b, err := sweep.JSONSchema()
	if err != nil {
		return err
	}
	_, err = con.out.Write(b)
	return err
}
