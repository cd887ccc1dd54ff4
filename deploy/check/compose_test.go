package check

import (
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/compose-spec/compose-go/v2/cli"
	"github.com/compose-spec/compose-go/v2/types"
)

// The compose file is one, starts as the header says, keeps every port to the machine itself, and mounts what exists.
func TestCompose(t *testing.T) {
	options, err := cli.NewProjectOptions([]string{"../compose.yaml"}, cli.WithName("dewmark"))
	if err != nil {
		t.Fatal(err)
	}
	project, err := options.LoadProject(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"dewmark", "prometheus", "grafana"} {
		s, err := project.GetService(name)
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range s.Ports {
			if p.HostIP != "127.0.0.1" {
				t.Errorf("%s listens on %q of the machine", name, p.HostIP)
			}
		}
		if len(s.CapDrop) != 1 || s.CapDrop[0] != "ALL" || !slices.Contains(s.SecurityOpt, "no-new-privileges:true") {
			t.Errorf("%s keeps rights: %v %v", name, s.CapDrop, s.SecurityOpt)
		}
		if s.Deploy == nil || s.Deploy.Resources.Limits == nil || s.Deploy.Resources.Limits.MemoryBytes == 0 {
			t.Errorf("%s may use all memory", name)
		}
		if _, tag, ok := strings.Cut(s.Image, ":"); !ok || tag == "latest" {
			t.Errorf("%s runs the image %q", name, s.Image)
		}
		for _, v := range s.Volumes {
			if v.Type != types.VolumeTypeBind {
				continue
			}
			if _, err := os.Stat(v.Source); err != nil || !v.ReadOnly {
				t.Errorf("%s mounts %s, read-only %t: %v", name, v.Source, v.ReadOnly, err)
			}
		}
	}
	// Prometheus reads its rules beside its configuration.
	mounts := project.Services["prometheus"].Volumes
	if i := slices.IndexFunc(mounts, func(v types.ServiceVolumeConfig) bool { return v.Target == "/etc/prometheus" }); i < 0 || filepath.Base(mounts[i].Source) != "prometheus" {
		t.Errorf("Prometheus has no configuration: %v", mounts)
	}
	if s := project.Services["dewmark"]; !s.ReadOnly || s.Build == nil || filepath.Base(s.Build.Dockerfile) != "Dockerfile" {
		t.Errorf("dewmark is not built or may write: %+v", s.Build)
	}
}
