package evidence

import "context"

func test(ctx context.Context, req Request, watch func(done, total int)) (*Evidence, error) {
	g := req.Graph
	if g == nil {
		var err error
		if g, err = req.Study.Graph(req.Rival); err != nil {
			return nil, err
		}
	}
	return &Evidence{Rival: req.Rival, Graph: g, Level: req.Level}, ctx.Err()
}
