package main

import (
	"context"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/cmd/rampwright/internal/runstore"
)

// pageName is the review page in a result folder.
const pageName = "report.html"

func (a *app) reportCommand() *cobra.Command {
	var file string
	var with []string
	cmd := &cobra.Command{
		Use: "report DIR", Short: "Write the review page of a result folder", Args: exactArgs(1),
		Long: `Write the review page of a design as one HTML file that stands alone: no
script, nothing fetched. It is made of the files in the result folder, the same
page as "design" puts there; by default it takes that page's place.

Further studies of the same brief become sections where DIR or a folder given by
--with holds NAME.json, with its pictures beside it. NAME is one of
` + strings.Join(report.StudyNames(), ", ") + `.`,
		RunE: func(cmd *cobra.Command, args []string) error {
			if file == "" {
				file = filepath.Join(args[0], pageName)
			}
			return a.report(args[0], with, file)
		},
	}
	cmd.Flags().StringVarP(&file, "output", "o", "", "file of the page (default DIR/"+pageName+")")
	cmd.Flags().StringArrayVar(&with, "with", nil, "folder of a further study to show as well; may be repeated")
	cmd.Flags().BoolVar(&a.quiet, "quiet", false, "no message")
	return cmd
}

// report writes the page of a folder, with the studies in others.
func (a *app) report(dir string, with []string, file string) error {
	folder, err := resultFolder(dir)
	if err != nil {
		return err
	}
	for _, other := range with {
		studies, err := studiesIn(other)
		if err != nil {
			return err
		}
		if studies == nil {
			return &usageError{other + " holds no study", "a study writes " + strings.Join(report.StudyNames(), ".json, ") + ".json"}
		}
		for _, s := range studies {
			if slices.ContainsFunc(folder.Studies, func(known report.StudyFile) bool { return known.Name == s.Name }) {
				return &usageError{other + " holds one more " + s.Name + ".json", "a page shows one of each"}
			}
		}
		folder.Studies = append(folder.Studies, studies...)
	}
	page, err := report.Page(*folder)
	if err != nil {
		return err
	}
	if err := os.WriteFile(file, page, 0o666); err != nil {
		return &unwritable{file, "choose another file with -o", err}
	}
	notices, err := report.StudyNotices(*folder)
	if err != nil {
		return err
	}
	for _, notice := range notices {
		a.say("%s\n", notice)
	}
	a.say("review page: %s\n", file)
	return nil
}

// resultFolder reads what a page needs of the result folder of a design.
func resultFolder(dir string) (*report.Folder, error) {
	var refused *runstore.Refused
	switch _, err := runstore.ReadMark(dir); {
	case errors.As(err, &refused) && refused.Why == runstore.NotOurs:
		return nil, &usageError{"no finished design there: " + dir + " is no result folder of a design", "rampwright design writes one"}
	case err != nil:
		return nil, err
	}
	folder := new(report.Folder)
	for _, f := range []struct {
		name     string
		into     *[]byte
		optional bool
	}{
		{"result.json", &folder.Result, false}, {"run.json", &folder.Run, false},
		{"review.json", &folder.Review, true}, {"inlet.svg", &folder.SideView, true},
	} {
		data, err := os.ReadFile(filepath.Join(dir, f.name))
		switch {
		case err == nil:
			*f.into = data
		case f.optional && errors.Is(err, fs.ErrNotExist):
		default:
			return nil, &usageError{"no finished design there: " + err.Error(), "rampwright design writes one"}
		}
	}
	var err error
	folder.Studies, err = studiesIn(dir)
	return folder, err
}

// studiesIn reads the studies a folder holds.
func studiesIn(dir string) ([]report.StudyFile, error) {
	var list []report.StudyFile
	for _, name := range report.StudyNames() {
		document, err := optionalFile(filepath.Join(dir, name+".json"))
		if err != nil {
			return nil, err
		}
		if document == nil {
			continue
		}
		s := report.StudyFile{Name: name, Document: document}
		for _, picture := range report.StudyPictures(name) {
			data, err := optionalFile(filepath.Join(dir, picture+".svg"))
			if err != nil {
				return nil, err
			}
			if data != nil {
				s.Pictures = append(s.Pictures, report.StudyPicture{Name: picture, Data: data})
			}
		}
		list = append(list, s)
	}
	return list, nil
}

// optionalFile reads a file, nil where there is none.
func optionalFile(path string) ([]byte, error) {
	data, err := os.ReadFile(path)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, nil
	}
	return data, err
}

// withPage adds the review of a finished design and its page to the files of the
// result.
func withPage(files []file, study *study, finished *report.Study) ([]file, error) {
	review, err := report.NewReview(context.Background(), study.head(study.brief.Effort.Seed), *finished)
	if err != nil {
		return nil, err
	}
	files = append(files, file{"review.json", review.JSON()})
	page, err := report.Page(folderOf(files))
	if err != nil {
		return nil, err
	}
	return append(files, file{pageName, page}), nil
}

// folderOf takes what a page needs from the files of a result.
func folderOf(files []file) report.Folder {
	var folder report.Folder
	for _, f := range files {
		switch f.name {
		case "result.json":
			folder.Result = f.data
		case "run.json":
			folder.Run = f.data
		case "review.json":
			folder.Review = f.data
		case "inlet.svg":
			folder.SideView = f.data
		}
	}
	return folder
}
