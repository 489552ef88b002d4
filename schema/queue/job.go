package queue

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"

	"github.com/google/uuid"

	"betaloom/schema"
)

// FormatJob is the version of the job message.
const FormatJob = 1

// MaxJob is the most bytes that a job message may have.
const MaxJob = 1 << 20

// MaxPoints is the most points that a job's tile may have.
const MaxPoints = 1 << 16

// Job is the message that carries one tile.
type Job struct {
	Format int         `json:"format"`          // FormatJob
	Run    string      `json:"run"`             // id of the run it belongs to
	Name   string      `json:"name"`            // of the tile: schema.Tile.Name
	Round  int         `json:"round,omitempty"` // how often the run has published this tile before
	Tile   schema.Tile `json:"tile"`
}

// NewJob makes the job of a tile.
func NewJob(run string, round int, t *schema.Tile) (*Job, error) {
	name, err := t.Name()
	if err != nil {
		return nil, fmt.Errorf("job: %w", err)
	}
	return &Job{Format: FormatJob, Run: run, Name: name, Round: round, Tile: *t}, nil
}

// Encode gives the message of a job. One above MaxJob is an error.
func (j *Job) Encode() ([]byte, error) {
	b, err := json.Marshal(j)
	if err != nil {
		return nil, fmt.Errorf("job %s: %w", j.Name, err)
	}
	if len(b) > MaxJob {
		return nil, fmt.Errorf("job %s: found a message of %d bytes, expected at most %d: the tables of its materials are too long", j.Name, len(b), MaxJob)
	}
	return b, nil
}

// ID is the message id of an encoded job: the UUIDv5 of its bytes, in the
// namespace of object identifiers (RFC 9562).
func ID(message []byte) string {
	return uuid.NewSHA1(uuid.NameSpaceOID, message).String()
}

// RefuseError says that a message is no job this program can take. It will be
// none however often it is delivered.
type RefuseError struct {
	Reason string
}

func (e *RefuseError) Error() string { return "job: " + e.Reason }

func refuse(format string, a ...any) error {
	return &RefuseError{Reason: fmt.Sprintf(format, a...)}
}

// Decode reads a message. Anything but a job of this format whose tile has
// the name it says is a *RefuseError. run is the run that the job must belong to.
func Decode(message []byte, run string) (*Job, error) {
	if len(message) > MaxJob {
		return nil, refuse("found a message of %d bytes, expected at most %d", len(message), MaxJob)
	}
	var head struct {
		Format int `json:"format"`
	}
	if err := json.Unmarshal(message, &head); err != nil {
		return nil, refuse("found no JSON object of a job: %v", err)
	}
	if head.Format != FormatJob {
		return nil, refuse("found format %d, expected %d", head.Format, FormatJob)
	}
	j, err := decodeStrictly(message)
	if err != nil {
		return nil, err
	}
	if j.Run != run {
		return nil, refuse("found run %.64q, expected %q", j.Run, run)
	}
	if err := checkTile(&j.Tile); err != nil {
		return nil, err
	}
	return j, checkName(j)
}

func decodeStrictly(message []byte) (*Job, error) {
	d := json.NewDecoder(bytes.NewReader(message))
	d.DisallowUnknownFields()
	j := new(Job)
	if err := d.Decode(j); err != nil {
		return nil, refuse("found no job: %v", err)
	}
	if _, err := d.Token(); !errors.Is(err, io.EOF) {
		return nil, refuse("found bytes after the job, expected none")
	}
	return j, nil
}

func checkName(j *Job) error {
	name, err := j.Tile.Name()
	if err != nil {
		return refuse("%v", err)
	}
	if name != j.Name {
		return refuse("found name %.64q, expected the hash of the tile, %s", j.Name, name)
	}
	return nil
}

// checkTile holds a tile to what the rest of the program takes for granted.
func checkTile(t *schema.Tile) error {
	if f := t.Physics.Format; f != schema.FormatPhysics {
		return refuse("found physics of format %d, expected %d", f, schema.FormatPhysics)
	}
	if t.Rows != nil && len(t.Axes) > 0 {
		return refuse("found both axes and rows, expected one of them")
	}
	if err := checkExtent(t); err != nil {
		return err
	}
	varies := make(map[string]bool)
	for _, name := range t.Varying() {
		p, ok := t.Physics.Parameter(name)
		if !ok || p.Kind != schema.Axis || varies[name] {
			return refuse("found values of %.64q, expected each of the parameters that vary once", name)
		}
		varies[name] = true
	}
	for _, p := range t.Physics.Parameters {
		if p.Kind == schema.Axis && !varies[p.Name] {
			return refuse("found no values of %.64q, which varies", p.Name)
		}
	}
	return nil
}

func checkExtent(t *schema.Tile) error {
	points := 1
	if t.Rows != nil {
		points = len(t.Rows)
	}
	for _, a := range t.Axes {
		n := len(a.Values)
		if n == 0 || points > MaxPoints/n {
			return refuse("found an axis %.64q of %d values, expected 1 to %d points in a tile", a.Parameter, n, MaxPoints)
		}
		points *= n
	}
	if points == 0 || points > MaxPoints {
		return refuse("found %d points, expected 1 to %d", points, MaxPoints)
	}
	for i, row := range t.Rows {
		if len(row) != len(t.Columns) {
			return refuse("found %d values in row %d, expected %d", len(row), i, len(t.Columns))
		}
	}
	return nil
}
