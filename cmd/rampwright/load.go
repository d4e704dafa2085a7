package main

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"strings"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/brief"
	"rampwright/problems"
	"rampwright/problems/inlet"
)

// maxBrief is the size a brief may have.
const maxBrief = 1 << 20

// study is a brief made ready: the problem it poses and what it asks of it.
type study struct {
	brief   *brief.Brief
	model   problems.Problem // what a search sees
	problem *inlet.Problem   // the model as an inlet; nil where the brief poses an analytic problem
	limits  []problems.Limit
}

// briefFlags adds a flag for every value of the brief that may be set on the
// command line.
func briefFlags(cmd *cobra.Command) {
	for _, key := range brief.FlagKeys() {
		meaning := key.Meaning
		if key.Unit != "" {
			meaning += ", " + key.Unit
		}
		cmd.Flags().String(strings.TrimPrefix(key.FlagName(), "--"), "", meaning)
	}
}

// overrides collects the brief flags that were given.
func overrides(cmd *cobra.Command) brief.Overrides {
	given := brief.Overrides{}
	for _, key := range brief.FlagKeys() {
		if flag := cmd.Flags().Lookup(strings.TrimPrefix(key.FlagName(), "--")); flag != nil && flag.Changed {
			given[key.Name] = flag.Value.String()
		}
	}
	return given
}

// read reads a brief with the overrides of the command line.
func read(cmd *cobra.Command, file string) (*study, error) {
	info, err := os.Stat(file)
	if err != nil {
		return nil, &usageError{"cannot read the brief: " + err.Error(), "rampwright new " + file + " writes a starter"}
	}
	if info.IsDir() {
		return nil, &usageError{file + " is a folder, not a brief", "name the YAML file"}
	}
	if info.Size() > maxBrief {
		return nil, &usageError{fmt.Sprintf("%s has %d bytes; a brief has at most %d", file, info.Size(), maxBrief), ""}
	}
	data, err := os.ReadFile(file)
	if err != nil {
		return nil, err
	}
	b, err := brief.Read(file, data, overrides(cmd))
	if err != nil {
		return nil, err
	}
	if b.Analytic != nil {
		return &study{brief: b, model: b.Analytic, limits: b.Resolve(nil, b.Analytic.OwnLimits())}, nil
	}
	problem, err := inlet.New(b.Definition)
	if err != nil {
		return nil, err
	}
	return &study{
		brief: b, model: problem, problem: problem,
		limits: b.Resolve(inlet.HardLimits(b.Definition), inlet.DefaultLimits(b.Definition)),
	}, nil
}

// defaults are the limits that hold unless the brief replaces them.
func (s *study) defaults() []problems.Limit {
	if s.brief.Analytic != nil {
		return s.brief.Analytic.OwnLimits()
	}
	return inlet.DefaultLimits(s.brief.Definition)
}

// modelHash names the true model: everything an evaluation at x depends on, and
// what the model answers at three probes, so that a ledger written by other code
// under the same version is not taken for this model's.
func (s *study) modelHash() (string, error) {
	variables := s.model.Variables()
	answers := make([][]uint64, 0, 3)
	for _, share := range []float64{0.25, 0.5, 0.75} {
		x := make([]float64, len(variables))
		for j, v := range variables {
			x[j] = v.Low + share*(v.High-v.Low)
		}
		evaluation := problems.NewEvaluation(len(s.model.Quantities()))
		if err := s.model.Evaluate(context.Background(), x, evaluation); err != nil {
			return "", err
		}
		bits := make([]uint64, len(evaluation.Values))
		for i, v := range evaluation.Values {
			bits[i] = math.Float64bits(v)
		}
		answers = append(answers, bits)
	}
	data, err := json.Marshal(struct {
		Version    string
		Definition inlet.Definition
		Quantities []problems.Quantity
		Answers    [][]uint64
		Analytic   string `json:",omitempty"`
	}{version, s.brief.Definition, s.model.Quantities(), answers, s.analyticName()})
	if err != nil {
		panic("a definition holds finite numbers only: " + err.Error())
	}
	sum := sha256.Sum256(data)
	return hex.EncodeToString(sum[:]), nil
}

// analyticName names the analytic problem, "" for an inlet.
func (s *study) analyticName() string {
	if s.brief.Analytic == nil {
		return ""
	}
	return s.brief.Analytic.Name
}
