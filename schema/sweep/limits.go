package sweep

// The limits of what is read. Beyond one of them a file is refused with a
// diagnostic that says the limit.
const (
	MaxFile       = 1 << 20       // bytes of a sweep file
	MaxTable      = 8 << 20       // bytes of a table
	MaxTables     = 64 << 20      // bytes of all tables of a sweep
	MaxPointsFile = 64 << 20      // bytes of a points file
	MaxRows       = 5_000_000     // rows of a points file
	MaxColumns    = 1000          // columns of a points file
	MaxAxis       = 1_000_000     // values of an axis
	MaxPoints     = 1_000_000_000 // points of a grid
	MaxModes      = 1000          // modes at a point, rows below cut-off, azimuthal order
	MaxPolygon    = 1000          // corners of a pipe
	MaxTolerance  = 64            // parameters with a tolerance in a window
	DefaultModes  = 4             // modes to report where the file does not say
)

const (
	maxDepth    = 64  // of the YAML tree; the deepest form has 9
	maxName     = 64  // bytes of a name
	maxProblems = 500 // diagnostics that are listed
	maxCells    = 20  // diagnostics of one table or points file
	maxHints    = 100 // names looked for among others
	maxColumn   = 200 // bytes of a column's name
	maxRequire  = 100 // requirements of a window
	maxWindows  = 100
	maxNames    = 1000 // parameters, materials
	maxLayers   = 1000 // layers of a section, strips of a layer
	minTable    = 4    // rows of a table: a smooth fit has no fewer coefficients
)
