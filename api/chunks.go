package api

import (
	"context"
	"slices"
)

// chunkSize is how many points a goroutine takes at a time: enough that handing over costs nothing beside them, few enough
// that the cores end together.
const chunkSize = 64

// chunk is the answer to some points in a row.
type chunk struct {
	text *[]byte // their items, parted by commas, in a buffer to be given back
	account
}

// chunks answers points in their order. It returns the cause when ctx ends first: nobody waits then.
func (j *job) chunks(ctx context.Context, points []point, shown *selection) ([]chunk, error) {
	if len(points) <= chunkSize {
		if err := breathe(ctx); err != nil {
			return nil, err
		}
		return []chunk{j.chunk(points, 0, shown)}, nil
	}
	chunks := make([]chunk, (len(points)+chunkSize-1)/chunkSize)
	err := inParallel(ctx, len(chunks), func(i int) {
		first := i * chunkSize
		chunks[i] = j.chunk(points[first:min(first+chunkSize, len(points))], first, shown)
	})
	return chunks, err
}

// chunk answers some points, the first of which is number first.
func (j *job) chunk(points []point, first int, shown *selection) chunk {
	w := takeWorker(j, shown)
	defer w.giveBack()
	buffer := takeBuffer()
	text := slices.Grow(*buffer, len(points)*(64+32*len(shown.fields)))
	for i := range points {
		if i > 0 {
			text = append(text, ',')
		}
		text = w.item(text, &points[i], place{"#/points", first + i})
	}
	*buffer = text
	return chunk{buffer, w.account}
}
