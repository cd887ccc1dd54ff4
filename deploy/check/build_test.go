package check

import (
	"os"
	"path/filepath"
	"testing"

	monitoring "github.com/prometheus-operator/prometheus-operator/pkg/apis/monitoring/v1"
	apps "k8s.io/api/apps/v1"
	autoscaling "k8s.io/api/autoscaling/v2"
	core "k8s.io/api/core/v1"
	networking "k8s.io/api/networking/v1"
	policy "k8s.io/api/policy/v1"
	"k8s.io/apimachinery/pkg/runtime"
	"k8s.io/apimachinery/pkg/runtime/serializer/json"
	"sigs.k8s.io/kustomize/api/krusty"
	"sigs.k8s.io/kustomize/kyaml/filesys"
)

// manifests are the objects of one kustomization, by kind.
type manifests struct {
	deployment     *apps.Deployment
	services       []*core.Service
	autoscaler     *autoscaling.HorizontalPodAutoscaler
	budget         *policy.PodDisruptionBudget
	networkPolicy  *networking.NetworkPolicy
	serviceAccount *core.ServiceAccount
	namespace      *core.Namespace            // of overlays alone
	serviceMonitor *monitoring.ServiceMonitor // likewise
	rules          *monitoring.PrometheusRule // likewise
}

// folders returns the base and every overlay.
func folders(t *testing.T) []string {
	t.Helper()
	overlays, err := filepath.Glob("../kubernetes/overlays/*")
	if err != nil || len(overlays) == 0 {
		t.Fatalf("no overlays: %v", err)
	}
	return append([]string{"../kubernetes/base"}, overlays...)
}

// build runs kustomize in a folder and decodes what comes out. A member that the API server does not know, a value of the
// wrong type and an object of a kind not listed here all fail.
func build(t *testing.T, folder string) *manifests {
	t.Helper()
	resources, err := krusty.MakeKustomizer(krusty.MakeDefaultOptions()).Run(filesys.MakeFsOnDisk(), folder)
	if err != nil {
		t.Fatalf("kustomize build %s: %v", folder, err)
	}
	scheme := runtime.NewScheme()
	for _, add := range []func(*runtime.Scheme) error{
		apps.AddToScheme, autoscaling.AddToScheme, core.AddToScheme, networking.AddToScheme, policy.AddToScheme, monitoring.AddToScheme,
	} {
		if err := add(scheme); err != nil {
			t.Fatal(err)
		}
	}
	decoder := json.NewSerializerWithOptions(json.DefaultMetaFactory, scheme, scheme, json.SerializerOptions{Yaml: true, Strict: true})
	var m manifests
	for _, r := range resources.Resources() {
		text, err := r.AsYAML()
		if err != nil {
			t.Fatal(err)
		}
		object, _, err := decoder.Decode(text, nil, nil)
		if err != nil {
			t.Fatalf("%s, %s %s: %v", folder, r.GetKind(), r.GetName(), err)
		}
		switch o := object.(type) {
		case *apps.Deployment:
			m.deployment = o
		case *core.Service:
			m.services = append(m.services, o)
		case *autoscaling.HorizontalPodAutoscaler:
			m.autoscaler = o
		case *policy.PodDisruptionBudget:
			m.budget = o
		case *networking.NetworkPolicy:
			m.networkPolicy = o
		case *core.ServiceAccount:
			m.serviceAccount = o
		case *core.Namespace:
			m.namespace = o
		case *monitoring.ServiceMonitor:
			m.serviceMonitor = o
		case *monitoring.PrometheusRule:
			m.rules = o
		default:
			t.Fatalf("%s: nothing checks a %T", folder, object)
		}
	}
	if m.deployment == nil || len(m.services) == 0 || m.autoscaler == nil || m.budget == nil || m.networkPolicy == nil || m.serviceAccount == nil {
		t.Fatalf("%s lacks an object: %+v", folder, m)
	}
	if len(m.deployment.Spec.Template.Spec.Containers) != 1 {
		t.Fatalf("%s: the pod has %d containers", folder, len(m.deployment.Spec.Template.Spec.Containers))
	}
	return &m
}

// pod returns the labels and the specification of the pods.
func (m *manifests) pod() (map[string]string, *core.PodSpec) {
	return m.deployment.Spec.Template.Labels, &m.deployment.Spec.Template.Spec
}

func (m *manifests) container() *core.Container {
	return &m.deployment.Spec.Template.Spec.Containers[0]
}

// variable returns the value of an environment variable of the container.
func (m *manifests) variable(t *testing.T, name string) string {
	t.Helper()
	for _, v := range m.container().Env {
		if v.Name == name {
			return v.Value
		}
	}
	t.Fatalf("the container has no variable %s", name)
	return ""
}

// eachFolder runs a test on the base and on every overlay.
func eachFolder(t *testing.T, f func(*testing.T, *manifests)) {
	for _, folder := range folders(t) {
		t.Run(filepath.Base(folder), func(t *testing.T) { f(t, build(t, folder)) })
	}
}

// read returns the text of a file.
func read(t *testing.T, name string) []byte {
	t.Helper()
	text, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	return text
}
