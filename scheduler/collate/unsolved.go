package collate

import (
	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/part"
	"betaloom/schema/point"
)

// unsolved sets b to the rows of a tile without a part: its points are
// failed with this reason, or excluded where keep is known to be false.
func unsolved(t *schema.Tile, reason string, b *column.Batch) error {
	points, err := point.New(t)
	if err != nil {
		return err
	}
	builder := part.NewBuilder(&t.Physics)
	for local := range t.Points() {
		keep, err := points.At(local)
		pt := part.Point{Values: points.Values, FrequencyHz: points.FrequencyHz, Guided: part.Missing, State: part.Failed, Reason: reason}
		if err == nil && !keep {
			pt.State, pt.Reason = part.Excluded, "keep: "+t.Physics.Keep
		}
		if err := builder.Add(pt, nil); err != nil {
			return err
		}
	}
	data, err := builder.Encode("")
	if err != nil {
		return err
	}
	return part.Read(&t.Physics, "", t.Points(), data, b)
}
