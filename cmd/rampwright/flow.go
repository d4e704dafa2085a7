package main

import (
	"context"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/problems"
	"rampwright/problems/inlet"
)

func (a *app) flowCommand() *cobra.Command {
	var of, waves string
	var strict bool
	var picture picture
	cmd := &cobra.Command{
		Use: "flow BRIEF", Short: "Compute the exact flow of one fixed geometry at every flight point", Args: exactArgs(1),
		Long: `Compute the exact flow of one fixed geometry at every flight point of the brief.

Values the brief searches are fixed by flags (--ramp-angle-deg 8.08,7.22,8.44
--cowl-angle-deg 8) or taken from a result folder (--of DIR), a flag winning. A
detached shock is an answer, not an error: --strict turns it into exit code 4.

Where ramp shocks cross ahead of the lip or fall inside it, where the brief says
throat: traced, and for an inlet given by its outline, every wave is traced and the
throat is an average. --svg draws the waves of one flight point. --waves traces
every flight point and writes its fronts, wall pressures, forces, stream tubes of
the throat plane and lip streamline as CSV files, with this result as flow.json,
into a new folder.`,
		RunE: func(cmd *cobra.Command, args []string) error {
			study, err := read(cmd, args[0])
			if err != nil {
				return err
			}
			return a.flow(study, of, strict, picture, wavesFolder(waves))
		},
	}
	cmd.Flags().StringVar(&of, "of", "", "take searched values from this result folder")
	cmd.Flags().BoolVar(&strict, "strict", false, "exit with code 4 unless every point is attached")
	cmd.Flags().StringVar(&picture.file, "svg", "", "draw the inlet and its waves into this file, which must not exist")
	cmd.Flags().StringVar(&picture.at, "at", "", "flight point of the drawing (default the first)")
	cmd.Flags().StringVar(&waves, "waves", "", "trace every flight point and write its waves and walls into this folder, which must not exist")
	cmd.Flags().BoolVar(&a.json, "json", false, "print one JSON document")
	briefFlags(cmd)
	return cmd
}

// picture is the drawing that flow is asked for: a file, and the flight point.
type picture struct{ file, at string }

// draw writes the side view at the point asked for.
func (p picture) draw(title string, flow *inlet.Flow) error {
	if p.file == "" {
		if p.at != "" {
			return &usageError{"--at names the flight point of a drawing, and there is none", "add --svg FILE"}
		}
		return nil
	}
	at := &flow.Points[0]
	var names []string
	for i := range flow.Points {
		names = append(names, flow.Points[i].Point.Name)
		if flow.Points[i].Point.Name == p.at {
			at = &flow.Points[i]
		}
	}
	if p.at != "" && at.Point.Name != p.at {
		return &usageError{fmt.Sprintf("there is no flight point %q", p.at), "points: " + strings.Join(names, ", ")}
	}
	if flow.ContourErr != nil {
		return &usageError{"nothing to draw: the contour does not close: " + flow.ContourErr.Error(), ""}
	}
	drawing, err := sideView(title, "preliminary geometry: inviscid flow, sharp edges; read the cautions of the flow", flow, at)
	if err != nil {
		return err
	}
	return writeNew(p.file, drawing)
}

func (a *app) flow(study *study, of string, strict bool, picture picture, waves wavesFolder) error {
	if study.problem == nil {
		return &usageError{"flow computes an inlet; this brief poses the analytic problem " + study.analyticName(), "rampwright design searches it, rampwright fits shows how well it can be fitted"}
	}
	x, err := study.fixed("flow", of)
	if err != nil {
		return err
	}
	if err := waves.check(picture.file); err != nil {
		return err
	}
	flow, err := study.problem.Flow(context.Background(), x)
	if err != nil {
		return err
	}
	if err := waves.trace(study.problem.Freeze(x), flow); err != nil {
		return err
	}
	if err := picture.draw(study.brief.Title, flow); err != nil {
		return err
	}
	document := report.NewFlow(study.head(0), study.problem, flow)
	if err := waves.write(a, flow, document); err != nil {
		return err
	}
	if err := a.print(document); err != nil {
		return err
	}
	for i := range flow.Points {
		if strict && flow.Points[i].Err != nil {
			return &endedWith{exitNotMet}
		}
	}
	return nil
}

// document is what a command prints.
type document interface {
	JSON() []byte
	Text(width int) string
}

// print writes a document to the output, as JSON where asked for.
func (a *app) print(d document) error {
	if a.json {
		_, err := a.out.Write(d.JSON())
		return err
	}
	_, err := io.WriteString(a.out, d.Text(a.width()))
	return err
}

// head names what a document is about.
func (s *study) head(seed int64) report.Head {
	return report.Head{Program: program, Title: s.brief.Title, BriefHash: s.brief.Hash(), Seed: seed}
}

// fixed returns a value for every searched setting: from the result folder given
// by --of, or an error of the command that names the flags.
func (s *study) fixed(command, of string) ([]float64, error) {
	variables := s.problem.Variables()
	if len(variables) == 0 {
		return nil, nil
	}
	if of == "" {
		var missing []string
		for _, v := range variables {
			if flag := variableFlag(v.Name); len(missing) == 0 || missing[len(missing)-1] != flag {
				missing = append(missing, flag)
			}
		}
		return nil, &usageError{
			"the brief searches " + variableNames(variables) + "; " + command + " needs one fixed geometry",
			"give " + strings.Join(missing, ", ") + ", or --of DIR for the best of a design",
		}
	}
	best, err := readBest(of)
	if err != nil {
		return nil, err
	}
	x := make([]float64, len(variables))
	for i, v := range variables {
		value, ok := best[v.Name]
		if !ok {
			return nil, &usageError{
				fmt.Sprintf("the result in %s has no %s", of, v.Name),
				"it was made from another brief: give " + variableFlag(v.Name),
			}
		}
		x[i] = value
	}
	return x, nil
}

// readBest reads the variables of the best design of a result folder.
func readBest(dir string) (map[string]float64, error) {
	file := filepath.Join(dir, "result.json")
	data, err := os.ReadFile(file)
	if err != nil {
		return nil, &usageError{"no result there: " + err.Error(), "rampwright design writes one"}
	}
	var result struct {
		Best struct {
			Variables map[string]float64 `json:"variables"`
		} `json:"best"`
	}
	if err := json.Unmarshal(data, &result); err != nil {
		return nil, &usageError{file + " is not a result: " + err.Error(), ""}
	}
	return result.Best.Variables, nil
}

// variableFlag is the flag that fixes a variable: every ramp has the same.
func variableFlag(name string) string {
	if strings.HasPrefix(name, "ramp_") {
		return "--ramp-angle-deg"
	}
	return "--" + strings.ReplaceAll(name, "_", "-")
}

func variableNames(variables []problems.Variable) string {
	names := make([]string, len(variables))
	for i, v := range variables {
		names[i] = v.Name
	}
	return strings.Join(names, ", ")
}
