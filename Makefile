# Two commands do: make run, make test. The rest is for contributors.
.PHONY: run build batch report test check bench bench-reference oracle cover golden need need-test

STUDY ?=
BIN := .build/bin

run: need build
	@if [ "$$(uname -s)" != Darwin ] && [ -z "$$DISPLAY$$WAYLAND_DISPLAY" ]; then \
		echo "There is no display to open a window on."; \
		echo "The batch program needs none. A report on the example study:  make report"; \
		echo "On a study of yours:  make report STUDY=path/to/study.arrowroot"; \
		exit 1; \
	fi
	$(BIN)/arrowroot $(STUDY)

build:
	go build -tags migrated_fynedo -o $(BIN)/arrowroot ./app

batch:
	CGO_ENABLED=0 go build -o $(BIN)/batch ./app/batch

report: batch
	$(BIN)/batch report -out report.html $(or $(STUDY),assets/examples/hedgerows.arrowroot)

# Everything. The driven window goes first and alone: it needs a steady hand.
test: need-test build
	ARROWROOT_WINDOW=1 go test -count=1 -tags migrated_fynedo -timeout 15m -run TestWindow ./app
	go test -tags migrated_fynedo -timeout 20m ./...

# What a reviewer would otherwise have to look for by hand.
check:
	@test -z "$$(gofmt -l app canvas compile infer assets)" || { echo "gofmt would change:"; gofmt -l app canvas compile infer assets; exit 1; }
	go mod tidy -diff
	go vet -tags migrated_fynedo ./...
	go tool staticcheck -tags migrated_fynedo ./...
	CGO_ENABLED=0 go build ./compile/... ./infer/... ./app/batch
	go test -race -short -timeout 20m ./compile/... ./infer/... ./canvas/draw/... ./canvas/scene/... ./app/fit/... ./app/session/... ./app/report/... ./app/batch/...

# Ratios measured side by side in one run; absolute times mean nothing here.
bench:
	go test -run '^$$' -bench Ratio -benchtime 10x ./compile/ops
	go test -run '^$$' -bench Reading ./compile/causal
	go test -run '^$$' -bench Frame ./canvas/scene
	go test -run '^$$' -bench Hand ./app/ui

# Our d-separation beside that of networkx, on the same graphs in one run.
bench-reference:
	@sh .build/need-reference.sh
	ARROWROOT_REFERENCE=1 go test -count=1 -v -run TestBesideNetworkx ./compile/causal

# What arrows say, against brute force on tens of thousands of random diagrams.
oracle:
	ARROWROOT_LONG=1 go test -count=1 -timeout 60m ./compile/causal

golden:
	go test ./canvas/... ./compile/model/... -update

need:
	@sh .build/need.sh run

need-test:
	@sh .build/need.sh test
