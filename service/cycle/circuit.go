package cycle

import (
	"context"
	"math"

	"dewmark/props"
)

// stream names a flow of refrigerant that is the same at all places along it.
type stream uint8

const (
	mainStream   stream = iota // through the evaporator and the compressor at label 1, unless a layout says otherwise
	highStream                 // through the condenser, where that flow is another one
	branchStream               // injection, or vapour of a flash tank
	streamCount
)

// node is the refrigerant at one place. Its index is that in [circuit.nodes].
type node struct {
	props.State
	index  int8
	place  place
	side   side
	stream stream
}

func (n *node) label() string { return placeNames[n.side][n.place].label }

// ports holds the indexes of the nodes on one side of a component; noNode fills the rest.
type ports [3]int8

const noNode = -1

func one(n *node) ports         { return ports{n.index, noNode, noNode} }
func two(a, b *node) ports      { return ports{a.index, b.index, noNode} }
func three(a, b, c *node) ports { return ports{a.index, b.index, c.index} }

// account is what a component does with a kilogram of its first inlet's stream. The flows come in when all are known.
type account struct {
	part    part
	side    side
	in, out ports
	heat    float64 // J/kg, into the refrigerant
	work    float64 // J/kg, likewise
	heatT   float64 // K, of what the heat comes from or goes to; NaN when not known
}

// compression is a compressor, or a step of compression, at work.
type compression struct {
	part         part
	side         side
	in, out      int8
	work         float64 // J/kg
	isentropic   float64 // efficiency
	volumetric   float64 // efficiency
	sharesVolume bool    // a step whose swept volume counts at another step
}

// No layout has more.
const (
	maxNodes        = 20
	maxAccounts     = 16
	maxCompressions = 2
)

// circuit is a machine while it is being put together. Its methods are the components: each takes the refrigerant at
// its inlets, puts the refrigerant at its outlets and records what it did. The first refusal sticks; what is put together
// after it means nothing.
type circuit struct {
	plan

	ctx context.Context

	fluid        model // of the circuit that is being put together
	refrigerants [sideCount]Refrigerant
	side         side
	low          lowSide
	high         highSide
	middle       middle
	evaporating  [sideCount]float64 // dew temperatures, K
	meanTrial    float64            // evaporating pressure on trial, Pa; NaN outside the search for a mean temperature
	searching    bool               // inside the search for another pressure

	flows            [streamCount]float64 // kg/s, on any common scale
	nodes            [maxNodes]node
	accounts         [maxAccounts]account
	compressions     [maxCompressions]compression
	nodeCount        int
	accountCount     int
	compressionCount int

	evaporatorInlet float64 // temperature at 6, K
	optima          []Optimum
	figures         Figures
	refused         *Refusal
}

// clear takes the machine apart. The pressures of the sides stay.
func (c *circuit) clear() {
	c.nodeCount, c.accountCount, c.compressionCount = 0, 0, 0
	c.flows = [streamCount]float64{mainStream: 1, highStream: 1}
	c.figures = noFigures
}

// enter turns to one circuit of a cascade.
func (c *circuit) enter(s side) { c.side, c.fluid.Refrigerant = s, c.refrigerants[s] }

// put puts refrigerant at a place. The field of the request is to blame when the property model has no such state.
func (c *circuit) put(at place, of stream, s props.State, err error, field string) *node {
	if err != nil {
		c.refuse(c.noState(at, field, err))
	}
	if c.refused != nil {
		c.nodeCount = 0 // keeps a layout that goes on from running out of nodes
	}
	n := &c.nodes[c.nodeCount]
	*n = node{s, int8(c.nodeCount), at, c.side, of}
	c.nodeCount++
	return n
}

func (c *circuit) record(p part, in, out ports, heat, work, heatT float64) {
	if c.refused != nil {
		return
	}
	c.accounts[c.accountCount] = account{p, c.side, in, out, heat, work, heatT}
	c.accountCount++
}

// refuse records the first obstacle.
func (c *circuit) refuse(r Refusal) {
	if c.refused == nil {
		c.refused = &r
	}
}

// flow returns the flow at n on the common scale.
func (c *circuit) flow(n *node) float64 { return c.flows[n.stream] }

// nan stands for a number that was not given or does not exist.
var nan = math.NaN()
