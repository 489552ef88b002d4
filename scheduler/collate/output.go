package collate

import (
	"bufio"
	"os"
	"path/filepath"

	"betaloom/schema/store"
)

// temporary ends the name of a file that is not whole yet.
const temporary = ".tmp"

// output is a file that gets its name when it is whole and durable.
type output struct {
	final  string
	file   *os.File // nil once it is synced
	buffer *bufio.Writer
	named  bool
}

func create(dir, name string) (*output, error) {
	final := filepath.Join(dir, name)
	f, err := os.Create(final + temporary)
	if err != nil {
		return nil, err
	}
	return &output{final: final, file: f, buffer: bufio.NewWriterSize(f, 1<<20)}, nil
}

// sync makes the content durable under its temporary name.
func (o *output) sync() error {
	if err := o.buffer.Flush(); err != nil {
		return err
	}
	if err := o.file.Sync(); err != nil {
		return err
	}
	err := o.file.Close()
	o.file = nil
	return err
}

// publish gives the synced file its name, durably.
func (o *output) publish() error {
	if err := store.Rename(o.final+temporary, o.final); err != nil {
		return err
	}
	o.named = true
	return nil
}

// discard removes a file that has no name yet.
func (o *output) discard() {
	if o.file != nil {
		o.file.Close()
		o.file = nil
	}
	if !o.named {
		os.Remove(o.final + temporary)
	}
}
