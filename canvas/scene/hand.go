package scene

// A Tool is what a drag on the sheet does.
type Tool string

// The tools.
const (
	SelectTool   Tool = "select"
	VariableTool Tool = "variable"
	ArrowTool    Tool = "arrow"
	CauseTool    Tool = "common cause"
	PlateTool    Tool = "plate"
)
